"""Advice on the light of a laser driver: what is compared with what, and what is said of it."""

from __future__ import annotations

from opto_ckt.formulas.eye_safety import class_1_limit, share_through, single_mode_spot
from opto_ckt.units import write
from tests.circuits.lc import FACET
from tests.circuits.sized import sized

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
