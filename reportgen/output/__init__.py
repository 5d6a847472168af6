"""To the disk, complete or not at all."""
