"""From figures to text and pictures; computes nothing but the place of ink."""
