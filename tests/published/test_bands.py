"""Printed edges of the bands of optical links."""

from __future__ import annotations

import pytest

from opto_ckt.formulas.bands import BANDS, band_of
from tests.near import near


def test_edges_of_itu_t_bands():
    """ITU-T G series supplement 39, as six secondary sources quote it: O from 1260 nm, U to 1675 nm."""
    printed_edges = {"O": 1360, "E": 1460, "S": 1530, "C": 1565, "L": 1625, "U": 1675}
    start = 1260
    for name, end in printed_edges.items():
        assert BANDS[name] == (near(start * 1e-9), near(end * 1e-9))
        start = end


@pytest.mark.parametrize(("wavelength", "name"), [(1310e-9, "O"), (1550e-9, "C"), (1259e-9, ""), (1676e-9, "")])
def test_a_wavelength_is_found_in_its_band(wavelength, name):
    assert band_of(wavelength) == name
