from __future__ import annotations

from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from pydantic import ValidationError

from opto_ckt.parts.photodiode import PhotodiodeData, WavelengthError
from opto_ckt.parts.record import Spread
from tests.near import near

PLAIN = {
    "material": "InGaAs",
    "responsivity": "0.9 A/W",
    "responsivity_wavelength": "1310 nm",
    "capacitance": {"typ": "1.5 pF", "max": "2 pF"},
    "capacitance_bias": "5 V",
    "dark_current": "1 nA",
    "reverse_voltage_max": "20 V",
}
POINTS = [{"bias": "10 V", "capacitance": "2 pF"}, {"bias": "0 V", "capacitance": "8 pF"}]


def diode(drop: tuple[str, ...] = (), **fields: Any) -> PhotodiodeData:
    return PhotodiodeData.model_validate({key: value for key, value in PLAIN.items() if key not in drop} | fields)


LISTED = diode(
    ("responsivity_wavelength",),
    responsivity=[
        {"wavelength": "1550 nm", "responsivity": {"typ": "1 A/W", "min": "0.9 A/W"}},
        {"wavelength": "1310 nm", "responsivity": {"typ": "0.9 A/W", "min": "0.8 A/W"}},
    ],
)
CURVE = diode(("capacitance", "capacitance_bias"), capacitance_points=POINTS)


def test_one_responsivity_scales_with_the_wavelength():
    assert diode().responsivity_at(1.31e-6) == 0.9
    assert diode().responsivity_at(0.655e-6) == near(0.45)


def test_listed_responsivity_is_read_between_the_points():
    assert LISTED.responsivity_at(1.43e-6) == near(0.95)
    spread = LISTED.responsivity_spread(1.43e-6)
    assert (spread.low, spread.high) == near((0.85, 0.95))
    assert LISTED.responsivity_at(1.6e-6) == near(1.6 / 1.55)


def test_beyond_the_cut_off_nothing_is_detected():
    with pytest.raises(WavelengthError, match=r"1800 nm is beyond the cut-off of InGaAs, 1653 nm"):
        diode().responsivity_at(1.8e-6)
    with pytest.raises(WavelengthError):
        diode(material="Si", responsivity_wavelength="900 nm").responsivity_at(1.31e-6)


def test_the_sheet_knows_better_than_the_material():
    far = diode(responsivity_wavelength="1700 nm")
    assert far.responsivity_at(1.7e-6) == 0.9
    assert diode(cutoff_wavelength="2 µm").responsivity_at(1.8e-6) == near(0.9 * 1.8 / 1.31)
    assert diode(material="other", cutoff_wavelength="2 µm").cutoff == 2e-6


def test_one_capacitance_grows_below_its_bias_and_stays_above():
    assert diode().capacitance_at(5.0) == near(1.5e-12)
    assert diode().capacitance_at(50.0) == near(1.5e-12)
    assert diode().capacitance_at(0.0) == near(1.5e-12 * (1 + 5 / 0.6) ** 0.5)
    assert diode(grading="0.333", built_in_voltage="0.5 V").capacitance_at(0.0) == near(1.5e-12 * 11**0.333)


def test_listed_capacitance_is_read_between_the_points_and_never_beyond():
    bias = np.array([0.0, 10.0, 40.0])
    assert CURVE.capacitance_at(bias) == near(np.array([8e-12, 2e-12, 2e-12]))
    halfway = 0.6 * ((1 + 10 / 0.6) ** 0.5 - 1)
    assert CURVE.capacitance_at(halfway) == near(4e-12)
    assert CURVE.capacitance_figure == Spread(typ=2e-12)


def test_zero_bias_form_is_the_junction_law():
    law = diode(("capacitance", "capacitance_bias"), zero_bias_capacitance="4 pF", built_in_voltage="0.5 V")
    assert law.capacitance_at(np.array([0.0, 1.5])) == near(np.array([4e-12, 2e-12]))


@given(st.floats(0, 20), st.floats(0.1, 10))
def test_another_capacitance_scales_the_whole_curve(bias: float, factor: float):
    for one in (diode(), CURVE):
        changed = one.capacitance_at(bias, capacitance=one.capacitance_figure.nominal * factor)
        assert changed == near(factor * one.capacitance_at(bias))


@given(st.floats(0, 30), st.floats(0, 30))
def test_more_bias_never_gives_more_capacitance(first: float, second: float):
    low, high = sorted((first, second))
    for one in (diode(), CURVE):
        assert one.capacitance_at(high) <= one.capacitance_at(low) * (1 + 1e-12)


def test_dark_current_doubles():
    assert diode().dark_current_at(298.15) == near(1e-9)
    assert diode().dark_current_at(np.array([308.15, 288.15])) == near(np.array([2e-9, 0.5e-9]))
    assert diode().dark_current_at(308.15, dark_current=np.array([3e-9, 5e-9])) == near(np.array([6e-9, 10e-9]))


@pytest.mark.parametrize(
    ("drop", "fields", "told"),
    [
        (("capacitance",), {}, "capacitance needs capacitance"),
        (("capacitance", "capacitance_bias"), {}, "the capacitance is missing"),
        ((), {"capacitance_points": POINTS}, "stated in more than one way"),
        ((), {"transit_frequency": "1 GHz", "rise_time": "1 ns"}, "the speed is stated in more than one way"),
        ((), {"gain": "10"}, "the avalanche gain needs gain_bias"),
        (("responsivity_wavelength",), {}, "responsivity: needs responsivity_wavelength"),
        (
            (),
            {"responsivity": [{"wavelength": "1 µm", "responsivity": "1 A/W"}]},
            "responsivity_wavelength: is not wanted",
        ),
        ((), {"material": "Xx"}, "'Xx' is not known; allowed are Si"),
        ((), {"material": "other"}, "'other' needs cutoff_wavelength"),
        ((), {"capacitance_bias": "21 V"}, "capacitance_bias: 21.0 V is above reverse_voltage_max 20.0 V"),
        ((), {"dark_current_bias": "21 V"}, "dark_current_bias: 21.0 V is above reverse_voltage_max 20.0 V"),
        ((), {"shunt_resistance": "-1 MΩ"}, "'-1 MΩ' is not above zero"),
    ],
)
def test_what_does_not_go_together(drop: tuple[str, ...], fields: dict[str, Any], told: str):
    with pytest.raises(ValidationError) as caught:
        diode(drop, **fields)
    assert told in str(caught.value)
