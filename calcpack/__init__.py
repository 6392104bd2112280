"""From a floor framing plan to calculation sheets an engineer can sign."""

__version__ = "0.1.0"
