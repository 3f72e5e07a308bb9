"""Printed figures of the filter behind a data receiver."""

from __future__ import annotations

from math import log10

import numpy as np
import pytest
from scipy.integrate import quad

from opto_ckt.formulas.filters import bessel, sections
from tests.published.printed import printed


def gain(frequency):
    """Of the fourth-order Bessel-Thomson filter, half power at 1."""
    return 1 / abs(np.polyval(bessel(4)[::-1], 1j * frequency))


@pytest.mark.parametrize(
    ("of_bit_rate", "figure"),
    [
        (0.3, "0.4"), (0.45, "1.0"), (0.6, "1.9"), (0.75, "3.0"), (0.9, "4.5"), (1.0, "5.7"), (1.5, "13.4"),
        (2.0, "21.4456"),
    ],
)  # fmt: skip
def test_reference_receiver(of_bit_rate, figure):
    """ITU-T G.957, annex, from memory: attenuation of the reference receiver, half power at 0.75 of the bit rate.

    At twice the bit rate 21.5 dB are tabulated, exact 21.45.
    """
    assert -20 * log10(gain(of_bit_rate / 0.75)) == printed(figure)
    assert -20 * log10(gain(2.0 / 0.75)) == pytest.approx(21.5, abs=0.06)


def test_bessel_thomson_of_order_4():
    """105/(105 + 105y + 45y² + 10y³ + y⁴), y = 2.114 at half power; the rest is computed here."""
    denominator = bessel(4)
    assert denominator[1] == printed("2.114")
    assert denominator[1] == printed("2.11392")
    y = denominator[1]
    assert denominator == pytest.approx(np.array([105, 105 * y, 45 * y**2, 10 * y**3, y**4]) / 105, rel=1e-12)
    assert quad(lambda f: gain(f) ** 2, 0, np.inf)[0] == printed("1.04637")
    (f_1, q_1), (f_2, q_2) = sections(denominator)
    assert (f_1, q_1) == (printed("1.43017"), printed("0.521935"))
    assert (f_2, q_2) == (printed("1.60336"), printed("0.805538"))
