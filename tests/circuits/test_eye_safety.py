"""Advice on the light of a laser driver: what is compared with what, and what is said of it."""

from __future__ import annotations

import pytest

from opto_ckt.circuits.drivers.eye_safety import hazard_levels
from opto_ckt.formulas.eye_safety import class_1_limit, share_through, single_mode_spot
from opto_ckt.parts.fibre import FibreData
from opto_ckt.parts.record import Spread
from opto_ckt.units import write
from tests.circuits.lc import FACET
from tests.circuits.sized import sized
from tests.published.printed import printed

NAME = "laser-current"
SINGLE_MODE = (("", '[fibre]\ncore = "8.2 µm"\nmode_field_diameter = "9.2 µm"'),)


def advice(*changes: tuple[str, str]) -> str:
    return next(caution for caution in sized(NAME, *changes).cautions if caution.startswith("eye safety"))


def worst(*changes: tuple[str, str]) -> float:
    return max(fault.light for fault in sized(NAME, *changes).faults)


def test_all_the_light_counts_without_a_fibre() -> None:
    said = advice()
    assert f"{write(worst(), 'W')} in the worst fault" in said
    assert "IEC 60825-1 allows Class 1 15.6 mW at 1310 nm" in said
    assert any("all the light of the fibre's end" in caution for caution in sized(NAME).cautions)


def test_a_fibre_gives_its_share_behind_a_magnifier() -> None:
    spot = single_mode_spot(distance=70e-3, wavelength=1310e-9, mode_field_diameter=9.2e-6)
    share = share_through(aperture=7e-3, spot=spot)
    assert f"{write(float(worst(*SINGLE_MODE) * share), 'W')} in the worst fault" in advice(*SINGLE_MODE)


def test_light_of_the_facet_is_met_as_it_leaves_the_fibre() -> None:
    """Power is stated at the facet and asked for in the fibre: at the most half of it arrives there."""
    assert f"{write(worst(*FACET) * 0.5, 'W')} in the worst fault" in advice(*FACET)


def test_the_verdict_follows_normal_running_and_fault() -> None:
    """At 850 nm Class 1 allows 0.78 mW."""
    near_infrared = (("wavelength", 'wavelength = "850 nm"'),)
    assert float(class_1_limit(850e-9)) < worst(*near_infrared)
    assert "above it in normal running" in advice(*near_infrared)
    faint = (
        *near_infrared,
        ("current  ", 'power = "0.1 mW"'),
        ("current_error", ""),
        ("threshold_current", 'threshold_current = "8 mA"'),
    )
    assert "above it in" in advice(*faint)


def test_wavelengths_without_a_limit_are_said() -> None:
    assert "a competent person has to look" in advice(("wavelength", 'wavelength = "4600 nm"'))


@pytest.mark.parametrize(
    ("wavelength", "level_1", "level_1m"), [(1270e-9, "25.8e-3", "42.8e-3"), (1550e-9, "10e-3", "136e-3")]
)
def test_hazard_levels_of_a_single_mode_fibre(wavelength: float, level_1: str, level_1m: str) -> None:
    """IEC 60825-2:2004/A1, annex D, from memory, for 11 µm; ADVA, FSP 3000 C hardware guide p. 347: 136 mW."""
    fibre = FibreData(core=Spread(typ=8.2e-6), mode_field_diameter=Spread(typ=11e-6))
    assert hazard_levels(fibre, wavelength) == (printed(level_1), printed(level_1m))


def test_hazard_levels_are_told_and_beyond_1400_nm_all_the_light_counts() -> None:
    long = (*SINGLE_MODE, ("wavelength", 'wavelength = "1550 nm"'))
    assert f"{write(worst(*long), 'W')} in the worst fault" in advice(*long)
    for changes in (SINGLE_MODE, long):
        assert any("hazard level 1 goes up to" in caution for caution in sized(NAME, *changes).cautions)
