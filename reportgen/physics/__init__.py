"""From sweeps to figures: pure array code that opens no file and prints nothing."""
