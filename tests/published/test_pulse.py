"""Figures of pulsed lasers."""

from __future__ import annotations

from opto_ckt.formulas.discharge import inductive_rise_time
from tests.near import near


def test_rise_time_of_a_coaxial_package() -> None:
    """PicoLAS, application note on laser-diode inductance (2023): 11 to 12 nH; 50 A and 100 V are ours, computed."""
    assert inductive_rise_time(inductance=11e-9, current=50.0, voltage=100.0) == near(5.5e-9)
