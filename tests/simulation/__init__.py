"""A workbench in numbers: units of known truth, an analyzer with known faults."""
