"""Light of a laser's facet in the fibre that a design names: by the beam's divergence, unless a coupling is stated."""

from __future__ import annotations

import numpy as np
import pytest

from opto_ckt.circuits.drivers.laser import asked_current, settle
from opto_ckt.circuits.drivers.launch import PRACTICE, launched
from opto_ckt.errors import InputError
from opto_ckt.limits import Limit
from tests.circuits.sized import model, read, sized
from tests.near import near

NAME = "laser-current"
BEAM = (
    (
        "plane  ",
        'plane = "facet"\ndivergence_parallel = "12°"\n'
        'divergence_perpendicular = { min = "25°", typ = "30°", max = "38°" }',
    ),
    ("slope_efficiency", 'slope_efficiency = { min = "0.2 W/A", typ = "0.25 W/A", max = "0.3 W/A" }'),
    ("power_max {18}=", 'power_max = "15 mW"'),
)
ASKED = ("current  ", 'current = "30 mA"\nplane = "fibre"')
SINGLE = ("", '[fibre]\ncore = "8.2 µm"\nmode_field_diameter = "9.2 µm"')
MULTI = ("", '[fibre]\ncore = "50 µm"\nnumerical_aperture = "0.2"')
MIRROR = 1 - (0.46 / 2.46) ** 2  #: what one face of glass lets in


def limit(*changes: tuple[str, str]) -> Limit:
    found = launched(read(NAME, *BEAM, ASKED, *changes).request)
    assert found is not None
    return found


def test_single_mode_is_the_overlap_of_elliptical_beam_and_mode() -> None:
    """Another road: the overlap integral on a grid, fields whose far field is half as strong at half the divergence."""
    wavelength, radius = 1310e-9, 4.6e-6
    at = np.linspace(-40e-6, 40e-6, 20_001)

    def share(divergence: float) -> float:
        waist = wavelength * np.sqrt(np.log(4)) / (np.pi * np.radians(divergence))
        beam, mode = np.exp(-((at / waist) ** 2)), np.exp(-((at / radius) ** 2))
        return float(np.trapezoid(beam * mode, at) ** 2 / (np.trapezoid(beam**2, at) * np.trapezoid(mode**2, at)))

    found = limit(SINGLE)
    assert found.nominal == near(MIRROR * share(12) * share(30), rel=1e-5)
    assert found.high > found.nominal > found.low == PRACTICE
    assert found.assumed


def test_multimode_is_the_cone_of_the_beam_within_that_of_the_fibre() -> None:
    """Another road: cos^L lobes integrated over the cones."""

    def share(divergence: float) -> float:
        exponent = -np.log(2) / np.log(np.cos(np.radians(divergence / 2)))
        inner, outer = np.linspace(0, np.arcsin(0.2), 20_001), np.linspace(0, np.pi / 2, 200_001)
        lit = [np.trapezoid(np.cos(a) ** exponent * np.sin(a), a) for a in (inner, outer)]
        return float(lit[0] / lit[1])

    found = limit(MULTI)
    assert found.nominal == near(MIRROR * (share(12) + share(30)) / 2, rel=1e-5)
    assert found.low == near(MIRROR * share(38), rel=1e-5)


@pytest.mark.parametrize("fibre", [SINGLE, MULTI], ids=["single mode", "multimode"])
def test_power_is_told_in_the_fibre_where_it_is_asked_for(fibre: tuple[str, str]) -> None:
    inside, outside = sized(NAME, *BEAM, ASKED, fibre), sized(NAME, *BEAM, fibre)
    share = limit(fibre)
    facet, within = outside.figure("optical_power"), inside.figure("optical_power")
    assert within.nominal == near(facet.nominal * share.nominal, rel=1e-3)
    assert within.high == near(facet.high * share.high, rel=1e-3)
    assert any("is reckoned to enter the fibre" in caution for caution in inside.cautions)
    assert not any("is reckoned to enter the fibre" in caution for caution in outside.cautions)
    assert any(entry.startswith("D1 coupling") for entry in inside.assumed)


def test_a_power_in_the_fibre_is_driven_for() -> None:
    asked = ("current  ", 'power = "0.5 mW"\nplane = "fibre"')
    found = model(NAME, *BEAM, asked, SINGLE)
    current = asked_current(found.request)
    light = float(settle(found.nominal(), found.request, current).power)
    assert light * limit(SINGLE).nominal == near(0.5e-3)


def test_a_stated_coupling_comes_first() -> None:
    stated = (BEAM[0][0], BEAM[0][1] + '\ncoupling = "40 %"')
    assert launched(read(NAME, stated, *BEAM[1:], ASKED, SINGLE).request) is None


def test_without_fibre_or_divergence_the_coupling_is_asked_for() -> None:
    with pytest.raises(InputError, match=r"its coupling is needed for the fibre, or \[fibre\] and the divergence"):
        read(NAME, *BEAM, ASKED)
    with pytest.raises(InputError, match="divergence of its beam"):
        read(NAME, ("plane  ", 'plane = "facet"'), ASKED, SINGLE)
