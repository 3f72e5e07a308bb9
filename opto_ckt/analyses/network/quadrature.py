r"""Integrals of rational power densities over a band, by Gauss-Kronrod panels in ln ω that are halved where needed.

Panels that all lanes share come first; what misses the tolerance is halved for its own lane and polynomial alone.
Nodes and weights are those of QUADPACK's qk15 (R. Piessens et al., QUADPACK, Springer 1983).
"""

from __future__ import annotations

from collections.abc import Sequence
from math import ceil, log

import numpy as np

from opto_ckt.analyses.network.lanes import Array, horner, over_points

TOLERANCE = 1e-6  #: error allowed in a shared panel, as a part of the lane's integral
FINER = 1e-7  #: error allowed in a panel that was halved
PANEL = log(10)  #: width of the first panels in ln ω
HALVINGS = 40
AT_ONCE = 16384  #: values computed at a time, so that they stay in the cache

_OUTER = (0.991455371120813, 0.949107912342759, 0.864864423359769, 0.741531185599394)
_INNER = (0.586087235467691, 0.405845151377397, 0.207784955007898)
_KRONROD = (0.0229353220105292, 0.0630920926299786, 0.104790010322250, 0.140653259715526)
_KRONROD_INNER = (0.169004726639268, 0.190350578064785, 0.204432940075299)
_GAUSS = (0.129484966168870, 0.279705391489277, 0.381830050505119)

NODES = np.array([*(-node for node in (*_OUTER, *_INNER)), 0.0, *reversed((*_OUTER, *_INNER))])
_half = (*_KRONROD, *_KRONROD_INNER)
KRONROD = np.array([*_half, 0.209482141084728, *reversed(_half)])
GAUSS = np.zeros(15)
GAUSS[1::2] = (*_GAUSS, 0.417959183673469, *reversed(_GAUSS))


def band_integrals(
    numerators: Sequence[Array], denominator: Array, low: float, high: float, power: int, beside: Array | float = 0.0
) -> Array:
    r"""Integral over ω from low to high of numerator(ω²)/denominator(ω²) · ω^power.

    Parameters
    ----------
    numerators : polynomials in x = ω², each of shape (orders, lanes).
    denominator : polynomial in x, positive at x > 0; shape (orders, lanes).
    low, high : ends of the band in the unit of ω, 0 < low < high.
    power : 0 for a white density, -1 for one that falls as 1/f.
    beside : what each integral is to be added to; the error is judged against the sum. Shape (polynomials, lanes).

    Returns
    -------
    Shape (polynomials, lanes), to about 1e-7 of each sum, 1e-6 at very sharp resonances; nan where halving
    panels does not get there.
    """
    lanes = denominator.shape[1]
    panels = max(1, ceil(log(high / low) / PANEL))
    edges = np.linspace(log(low), log(high), panels + 1)
    half = (edges[1] - edges[0]) / 2
    parts: list[tuple[Array, Array]] = []
    together = max(1, AT_ONCE // (15 * lanes))
    for first in range(0, panels, together):
        some = edges[first : min(first + together, panels)]
        points = np.exp((some + half)[:, None] + half * NODES)
        parts.append(_shared_panels(numerators, denominator, points, half, power))
    fine, coarse = (np.concatenate(part, axis=1) for part in zip(*parts, strict=True))
    size = fine.sum(axis=1) + beside
    missed = _missed(fine, coarse, size[:, None], TOLERANCE)
    total = np.asarray(np.where(missed, 0.0, fine).sum(axis=1))
    polynomial, panel, lane = np.nonzero(missed)
    start = edges[panel]
    for _ in range(HALVINGS):
        if not len(lane):
            return total
        start = np.concatenate((start, start + half))
        polynomial, lane = np.tile(polynomial, 2), np.tile(lane, 2)
        half /= 2
        at = np.exp(start + half + half * NODES[:, None])
        values = np.empty_like(at)
        for index, numerator in enumerate(numerators):
            own = polynomial == index
            values[:, own] = horner(numerator[:, None, lane[own]], at[:, own] ** 2)
        values *= at ** (power + 1) / horner(denominator[:, None, lane], at**2)
        closer, rough = (KRONROD * half) @ values, (GAUSS * half) @ values
        again = _missed(closer, rough, size[polynomial, lane], FINER)
        np.add.at(total, (polynomial[~again], lane[~again]), closer[~again])
        polynomial, lane, start = polynomial[again], lane[again], start[again]
    np.add.at(total, (polynomial, lane), np.nan)
    return total


def _shared_panels(
    numerators: Sequence[Array], denominator: Array, points: Array, half: float, power: int
) -> tuple[Array, Array]:
    """Integral over each panel of points by the 15- and the 7-point rule; shape (polynomials, panels, lanes)."""
    flat = points.ravel()
    weight = (flat ** (power + 1))[:, None] / over_points(denominator, flat**2)
    rules = np.stack((KRONROD, GAUSS)) * half
    shape = (*points.shape, denominator.shape[1])
    stacked = np.array([rules @ (over_points(numerator, flat**2) * weight).reshape(shape) for numerator in numerators])
    return stacked[:, :, 0], stacked[:, :, 1]


def _missed(
    fine: Array, coarse: Array, total: Array, tolerance: float
) -> np.ndarray[tuple[int, ...], np.dtype[np.bool_]]:
    """Where the 15-point rule is too far off: its error is about the 3/2 power of what the 7-point rule differs by."""
    with np.errstate(divide="ignore", invalid="ignore"):
        difference = np.abs(fine - coarse) / total
    return np.asarray((difference > tolerance ** (2 / 3)) & (total > 0))
