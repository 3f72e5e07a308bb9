"""Printed figures of heat."""

from __future__ import annotations

import pytest

from opto_ckt.constants import ZERO_CELSIUS
from opto_ckt.formulas.thermal import (
    allowed_power,
    allowed_thermal_resistance,
    derated_power,
    junction_temperature,
    sink_resistance,
    sink_resistance_with_parallel_path,
    thermal_resistance,
)
from tests.near import near
from tests.published.printed import printed


def celsius(degrees):
    return degrees + ZERO_CELSIUS


def test_sedra_smith_14_4():
    """A. S. Sedra & K. C. Smith, Microelectronic Circuits, Ex. 14.4 (p. 1251); 87.5 °C is for 25 °C of air and 1 W."""
    r = thermal_resistance(junction_limit=celsius(150), rated_temperature=celsius(25), rated_power=2.0)
    assert r == printed("62.5")
    power = allowed_power(junction_limit=celsius(150), reference_temperature=celsius(50), thermal_resistance=r)
    assert power == printed("1.6")
    hot = junction_temperature(reference_temperature=celsius(25), power=1.0, thermal_resistance=r)
    assert hot - ZERO_CELSIUS == printed("87.5")


def test_jacob_4_6():
    """J. M. Jacob, Power Electronics, Ex. 4.6 (p. 179)."""
    r = sink_resistance(
        junction_limit=celsius(125),
        ambient_temperature=celsius(40),
        power=2.92,
        junction_to_case=2.5,
        case_to_sink=2.0,
    )
    assert r == printed("24.61")


def test_bell_8_14():
    """D. A. Bell, Electronic Devices and Circuits, Ex. 8.14 (p. 339): 20 W."""
    r = sink_resistance(
        junction_limit=celsius(90),
        ambient_temperature=celsius(25),
        power=20.0 * 1.0,
        junction_to_case=1.0,
        case_to_sink=0.4,
    )
    assert r == printed("1.85")


def test_kolimbiris_6_1_and_6_4():
    """H. Kolimbiris, Fiber Optics Communications, Ex. 6.1 (p. 139) and 6.4 (p. 148)."""
    r = allowed_thermal_resistance(junction_limit=celsius(125), reference_temperature=celsius(60), power=1.8)
    assert r == printed("36.11")
    hot = junction_temperature(reference_temperature=celsius(25), power=0.0684 + 0.12, thermal_resistance=84.0)
    assert hot - ZERO_CELSIUS == printed("40.83")


def test_kolimbiris_6_3():
    """Kolimbiris, Ex. 6.3 (p. 140); 17.7 K/W is assumed there."""
    r = sink_resistance_with_parallel_path(
        allowed=17.7, junction_to_ambient=33.0, junction_to_case=3.0, case_to_sink=0.65
    )
    assert r == printed("34.53")


def test_crcw1206_derating():
    """Distributor's note on Vishay CRCW1206-HP: 0.5 W at 100 °C.

    The note reads a curve, hence its 4 %; the straight line gives 0.4853 W.
    """
    power = derated_power(rated_power=0.75, temperature=celsius(100), knee=celsius(70), zero=celsius(155))
    assert power == printed("0.4852941")
    assert power == near(0.5, rel=0.04)


def test_0603_derating():
    """Film resistor data sheets: 0.1 W, 70 °C to 155 °C, at 100 °C."""
    power = derated_power(rated_power=0.1, temperature=celsius(100), knee=celsius(70), zero=celsius(155))
    assert power == printed("0.0647059")


@pytest.mark.parametrize(("power", "resistance"), [(0.1, 550.0), (0.125, 440.0), (0.25, 220.0)])
def test_tnpw_film_temperature(power, resistance):
    """Vishay, TNPW e3 data sheet: rated power at 70 °C makes a 125 °C film in 0603, 0805 and 1206."""
    film = junction_temperature(reference_temperature=celsius(70), power=power, thermal_resistance=resistance)
    assert film - ZERO_CELSIUS == printed("125")
    assert film - ZERO_CELSIUS == pytest.approx(125.0, abs=1e-9)
