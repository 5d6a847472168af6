"""From a runs folder to builds: scan, sidecars, Touchstone files, findings."""
