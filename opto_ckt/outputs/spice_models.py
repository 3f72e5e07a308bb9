"""The SPICE model of every kind of element, gathered from the modules that hold them."""

from __future__ import annotations

from opto_ckt.outputs import spice_amplifiers, spice_optics, spice_pulse, spice_simple
from opto_ckt.outputs.spice_cards import cards

__all__ = ["MODELS", "cards"]

MODELS = (spice_amplifiers, spice_optics, spice_pulse, spice_simple)
"""Each registers the elements that it knows with `cards`."""
