"""What helps to write sidecars: starters from the sweeps of a folder, and a schema for editors."""
