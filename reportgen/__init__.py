"""From folders of network-analyzer sweeps to published pages on wound impedance transformers."""

__version__ = "0.1.0"
