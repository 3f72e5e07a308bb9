"""Low-pass filters from their polynomial: Butterworth, Bessel; ladders by continued fraction, sections by their roots.

All are normalised: the gain is 1 at DC and half the power passes at an angular frequency of 1.
"""

from __future__ import annotations

from math import factorial, pi

import numpy as np
from numpy.typing import NDArray

from opto_ckt.formulas.formula import Real, source

Coefficients = NDArray[np.float64]

HALVINGS = 60  #: of the interval that holds the half-power frequency of a Bessel filter


def butterworth(order: int) -> Coefficients:
    """Denominator of the maximally flat low-pass, lowest power first.

    >>> butterworth(2).round(4).tolist()
    [1.0, 1.4142, 1.0]
    """
    poles = np.exp(1j * pi * (2 * np.arange(1, order + 1) + order - 1) / (2 * order))
    return np.asarray(np.poly(poles).real[::-1])


def bessel(order: int) -> Coefficients:
    """Denominator of the Bessel-Thomson low-pass, lowest power first, half power at 1.

    W. E. Thomson, 1949: the reverse Bessel polynomial, (2n - k)!/(2^(n - k) k! (n - k)!) its coefficients.

    >>> bessel(4).round(4).tolist()
    [1.0, 2.1139, 1.9151, 0.8997, 0.1902]
    """
    raw = [
        factorial(2 * order - k) / (2 ** (order - k) * factorial(k) * factorial(order - k)) for k in range(order + 1)
    ]
    delayed = np.array(raw) / raw[0]
    low, high = 0.1, 10.0
    for _ in range(HALVINGS):
        middle = (low * high) ** 0.5
        power = abs(np.polyval(delayed[::-1], 1j * middle)) ** 2
        low, high = (middle, high) if power < 2 else (low, middle)
    return np.asarray(delayed * low ** np.arange(order + 1))


def ladder(denominator: Coefficients) -> list[float]:
    """Elements of an LC ladder behind a source of resistance 1 into an open end, from the source on.

    The last element is a capacitor to ground; before it series inductors and capacitors to ground take turns. From the
    continued fraction of the even over the odd part of the denominator, which is the impedance that the source sees.

    >>> [round(value, 4) for value in ladder(butterworth(3))]
    [0.5, 1.3333, 1.5]
    """
    even, odd = denominator.copy(), denominator.copy()
    even[1::2], odd[0::2] = 0.0, 0.0
    above, below = (even, odd) if len(denominator) % 2 else (odd, even)
    elements = []
    for degree in range(len(denominator) - 1, 0, -1):
        quotient = above[degree] / below[degree - 1]
        elements.append(float(quotient))
        rest = above - quotient * np.concatenate([[0.0], below[:-1]])
        above, below = below, rest
    return elements


def sections(denominator: Coefficients) -> list[tuple[float, float]]:
    """Natural frequency and Q of each pair of poles, the least Q first, and a single pole (Q 0.5) ahead of them.

    >>> [(round(f, 4), round(q, 4)) for f, q in sections(bessel(4))]
    [(1.4302, 0.5219), (1.6034, 0.8055)]
    """
    found = []
    for root in np.roots(denominator[::-1]):
        if abs(root.imag) < 1e-9 * abs(root):
            found.append((float(abs(root)), 0.5))
        elif root.imag > 0:
            found.append((float(abs(root)), float(abs(root) / (-2 * root.real))))
    return sorted(found, key=lambda pair: pair[1])


@source("R. P. Sallen & E. L. Key, 1955, gain 1: C_f/C_g = 4 Q² with equal resistors")
def sallen_key_feedback_capacitance(*, resistance: Real, frequency: Real, quality: Real) -> Real:
    r"""Capacitor from the output of a unity-gain second-order section, both resistors equal.

    .. math:: C_f = \frac{2 Q}{2\pi f_0 R}

    Parameters
    ----------
    resistance : R, of each of the two. [Ω]
    frequency : f_0 of the pair of poles. [Hz]
    quality : Q of the pair. [1]

    Returns
    -------
    C_f. [F]

    Notes
    -----
    Op amp far faster than f_0 Q.
    """
    return quality / (pi * frequency * resistance)


@source("R. P. Sallen & E. L. Key, 1955, gain 1: C_f/C_g = 4 Q² with equal resistors")
def sallen_key_ground_capacitance(*, resistance: Real, frequency: Real, quality: Real) -> Real:
    r"""Capacitor to ground of a unity-gain second-order section, both resistors equal.

    .. math:: C_g = \frac{1}{4\pi f_0 Q R}

    Parameters
    ----------
    resistance : R, of each of the two. [Ω]
    frequency : f_0 of the pair of poles. [Hz]
    quality : Q of the pair. [1]

    Returns
    -------
    C_g. [F]

    Notes
    -----
    Op amp far faster than f_0 Q.
    """
    return 1 / (4 * pi * frequency * quality * resistance)


@source("definition: normalised to resistance and half-power frequency")
def scaled_inductance(*, normalised: Real, resistance: Real, frequency: Real) -> Real:
    r"""Inductance of a filter from its normalised value.

    .. math:: L = \frac{l R}{2\pi f}

    Parameters
    ----------
    normalised : l. [1]
    resistance : R of the source. [Ω]
    frequency : f, half power. [Hz]

    Returns
    -------
    L. [H]

    Notes
    -----
    No losses.
    """
    return normalised * resistance / (2 * pi * frequency)


@source("definition: normalised to resistance and half-power frequency")
def scaled_capacitance(*, normalised: Real, resistance: Real, frequency: Real) -> Real:
    r"""Capacitance of a filter from its normalised value.

    .. math:: C = \frac{c}{2\pi f R}

    Parameters
    ----------
    normalised : c. [1]
    resistance : R of the source. [Ω]
    frequency : f, half power. [Hz]

    Returns
    -------
    C. [F]

    Notes
    -----
    No losses.
    """
    return normalised / (2 * pi * frequency * resistance)
