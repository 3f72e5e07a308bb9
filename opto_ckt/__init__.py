"""Opto-ckt sizes the driver and receiver circuits of optical links and optical sensors."""

__version__ = "0.1.0"
