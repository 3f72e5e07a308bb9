r"""Integrals of rational power densities over a band, by Gauss-Kronrod panels in ln ω that are halved where needed.

Panels that all lanes share come first. Where the two rules differ in one of them, all panels of that lane are halved,
and again where they still differ; the finer rule is closer by orders of magnitude.
Nodes and weights are those of QUADPACK's qk15 (R. Piessens et al., QUADPACK, Springer 1983).
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from math import ceil, log

import numpy as np

from opto_ckt.analyses.network.lanes import Array, Index, horner, over_points

TOLERANCE = 2e-5  #: difference allowed between the two rules in a shared panel, as a part of the lane's integral
FINER = 1e-7  #: difference allowed between the two rules in a panel that was halved
OUTER = 5 * log(10)  #: widest panel beside the roots of D, in ln ω
BESIDE = 2.0  #: how far past the extent of the roots "beside" begins
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


@dataclass(frozen=True)
class Density:
    """A power density over ω: (white(ω²) + flicker(ω²)/ω) / |D|², as numerators of shape (orders, lanes) or None."""

    white: Array | None
    flicker: Array | None

    def over_points(self, omega: Array) -> Array:
        """Numerator × ω at points that all lanes share; shape (points, lanes)."""
        parts = []
        if self.white is not None:
            parts.append(over_points(self.white, omega**2, omega))
        if self.flicker is not None:
            parts.append(over_points(self.flicker, omega**2))
        return parts[0] if len(parts) == 1 else np.asarray(sum(parts))

    def at(self, omega: Array, lanes: Index) -> Array:
        """Numerator × ω at points of their own for some lanes; shape (points, lanes)."""
        total = np.zeros_like(omega)
        if self.white is not None:
            total += horner(self.white[:, None, lanes], omega**2) * omega
        if self.flicker is not None:
            total += horner(self.flicker[:, None, lanes], omega**2)
        return total


def band_integrals(
    densities: Sequence[Density], denominator: Array, edges: Array, beside: Array | float = 0.0
) -> Array:
    r"""Integrals of densities over ω, from the first edge to the last.

    Parameters
    ----------
    densities : what to integrate.
    denominator : |D|², a polynomial in x = ω², positive at x > 0; shape (orders, lanes).
    edges : ln ω at the ends of the panels to begin with.
    beside : what each integral is to be added to; the error is judged against the sum. Shape (densities, lanes).

    Returns
    -------
    Shape (densities, lanes), to about 1e-6 of each sum at worst; nan where halving panels does not get there.
    """
    lanes, panels = denominator.shape[1], len(edges) - 1
    half = np.diff(edges) / 2
    parts: list[tuple[Array, Array]] = []
    together = max(1, AT_ONCE // (15 * lanes))
    for first in range(0, panels, together):
        some = slice(first, min(first + together, panels))
        parts.append(_shared_panels(densities, denominator, edges[:-1][some], half[some]))
    fine, coarse = (np.concatenate(part, axis=1) for part in zip(*parts, strict=True))
    size = fine.sum(axis=1) + beside
    missed = np.abs(fine - coarse) > TOLERANCE * size[:, None]
    if not missed.any():
        return np.asarray(fine.sum(axis=1))
    missed |= missed.any(axis=1, keepdims=True)
    total = np.asarray(np.where(missed, 0.0, fine).sum(axis=1))
    which, panel, lane = np.nonzero(missed)
    start, width = edges[panel], half[panel]
    for _ in range(HALVINGS):
        if not len(lane):
            return total
        start = np.concatenate((start, start + width))
        which, lane, width = np.tile(which, 2), np.tile(lane, 2), np.tile(width, 2) / 2
        omega = np.exp(start + width + width * NODES[:, None])
        values = np.empty_like(omega)
        for index, density in enumerate(densities):
            own = which == index
            values[:, own] = density.at(omega[:, own], lane[own])
        values *= width / horner(denominator[:, None, lane], omega**2)
        closer, rough = KRONROD @ values, GAUSS @ values
        again = np.abs(closer - rough) > FINER * size[which, lane]
        np.add.at(total, (which[~again], lane[~again]), closer[~again])
        which, lane, start, width = which[again], lane[again], start[again], width[again]
    np.add.at(total, (which, lane), np.nan)
    return total


def panel_edges(low: float, high: float, extent: tuple[float, float], decades: float = 0.5) -> Array:
    """ln ω at the ends of panels from low to high: some decades each where D has its roots, wider where it has none."""
    inner = np.clip((extent[0] / BESIDE, extent[1] * BESIDE), low, high)
    stretches = ((low, inner[0], OUTER), (inner[0], inner[1], decades * log(10)), (inner[1], high, OUTER))
    edges = [log(low)]
    for start, end, width in stretches:
        if end > start:
            count = ceil(log(end / start) / width)
            edges += [log(start) + log(end / start) * step / count for step in range(1, count + 1)]
    return np.array(edges)


def _shared_panels(densities: Sequence[Density], denominator: Array, start: Array, half: Array) -> tuple[Array, Array]:
    """Integral over each panel by the 15- and the 7-point rule; shape (densities, panels, lanes)."""
    omega = np.exp((start + half)[:, None] + half[:, None] * NODES).ravel()
    below = over_points(denominator, omega**2)
    rules = np.stack((KRONROD, GAUSS)) * half[:, None, None]
    stacked = np.empty((len(densities), len(start), 2, denominator.shape[1]))
    for index, density in enumerate(densities):
        values = density.over_points(omega)
        values /= below
        np.matmul(rules, values.reshape(len(start), 15, -1), out=stacked[index])
    return stacked[:, :, 0], stacked[:, :, 1]
