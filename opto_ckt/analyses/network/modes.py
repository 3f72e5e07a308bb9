"""Poles of every lane, and the residues of the step response at them."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from opto_ckt.analyses.network.lanes import Array, Complex, Lanes, by_order, horner

NEAR = 0.03
"""Poles closer than this, relative to their size, may be one repeated pole that rounding has spread."""

NUDGE = 4e-9  #: what a repeated pole's factor is moved by
ROUNDING = float(np.finfo(float).eps)
SPREAD = 100.0  #: rounding spreads an m-fold pole by about ROUNDING**(1/m); this much more is taken to be the same pole


@dataclass(frozen=True)
class Modes:
    """Step response as a constant and exponentials, in scaled time: y(t) = constant + Re Σ residue · e^(pole · t).

    Parameters
    ----------
    poles : shape (order, lanes); nan past a lane's own order.
    residues : same shape; zero past a lane's own order.
    constant : final value of a stable lane.
    """

    poles: Complex
    residues: Complex
    constant: Array

    def response(self, time: Array, derivative: int = 0) -> Array:
        """Step response or one of its time derivatives; of a conjugate pair one pole counts twice."""
        shape = np.broadcast_shapes(np.shape(time), self.constant.shape)
        value = np.zeros(shape) if derivative else np.broadcast_to(self.constant, shape).copy()
        poles = np.where(np.isnan(self.poles), -1.0, self.poles)
        weights = np.where(poles.imag > 0, 2.0, np.where(poles.imag < 0, 0.0, 1.0))
        with np.errstate(over="ignore", invalid="ignore"):
            for pole, residue in zip(poles, self.residues * weights, strict=True):
                if not residue.any():
                    continue
                if not (pole.imag.any() or residue.imag.any()):
                    value += residue.real * pole.real**derivative * np.exp(pole.real * time)
                else:
                    value += (residue * pole**derivative * np.exp(pole * time)).real
        return value

    def lanes(self, part: Lanes) -> Modes:
        """The modes of some lanes."""
        return Modes(self.poles[:, part], self.residues[:, part], self.constant[part])


def poles_of(denominator: Array) -> Complex:
    """Roots of D in scaled s, by the eigenvalues of its companion matrix and Newton steps; nan past a lane's order."""
    order, lanes = len(denominator) - 1, denominator.shape[1]
    poles = np.full((order, lanes), complex(np.nan, np.nan))
    for low, high, group in by_order(denominator):
        if high > low:
            own = denominator[low : high + 1, group]
            poles[: high - low, group] = _polished(_companion_roots(own), own)
        poles[high - low : high, group] = 0.0
    return poles


def modes_of(denominator: Array, numerator: Array, poles: Complex) -> Modes:
    """Modes of the step response of N/D whose poles are known."""
    centre, offset = _parted(poles, denominator)
    poles = centre + offset
    present = ~np.isnan(poles)
    at = np.where(present, poles, 1.0)
    apart = (centre[:, None] - centre[None, :]) + (offset[:, None] - offset[None, :])
    apart[~(present[:, None] & present[None, :])] = 1.0
    apart[np.arange(len(at)), np.arange(len(at))] = 1.0
    leading = np.ones(denominator.shape[1])
    for _, high, group in by_order(denominator):
        leading[group] = denominator[high, group]
    with np.errstate(divide="ignore", invalid="ignore"):
        residues = horner(numerator, at) / (at * leading * apart.prod(axis=1))
        constant = numerator[0] / denominator[0]
    return Modes(poles, np.where(present, residues, 0.0), constant)


def _companion_roots(coefficients: Array) -> Complex:
    order = len(coefficients) - 1
    matrix = np.zeros((coefficients.shape[1], order, order))
    matrix[:, np.arange(1, order), np.arange(order - 1)] = 1.0
    matrix[:, :, -1] = (-coefficients[:-1] / coefficients[-1]).T
    known = np.isfinite(matrix).all(axis=(1, 2))
    roots = np.full(coefficients.shape[::-1], complex(np.nan, np.nan))[:, :order]
    roots[known] = np.linalg.eigvals(matrix[known])
    return roots.T


def _polished(roots: Complex, coefficients: Array) -> Complex:
    """Two Newton steps, each kept where it moves a root by little and not onto its neighbour."""
    slope = coefficients[1:] * np.arange(1, len(coefficients))[:, None]
    room = 0.1 * _nearest(roots)
    for _ in range(2):
        with np.errstate(divide="ignore", invalid="ignore"):
            step = horner(coefficients, roots) / horner(slope, roots)
        roots = np.where(np.abs(step) < room, roots - step, roots)
    return roots


def _nearest(roots: Complex) -> Array:
    """Distance of each root to its nearest neighbour, at most a tenth of its own size."""
    distance = np.abs(roots[:, None] - roots[None, :])
    distance[np.arange(len(roots)), np.arange(len(roots))] = np.inf
    return np.asarray(np.minimum(distance.min(axis=1, initial=np.inf), 0.1 * np.abs(roots)))


def _parted(poles: Complex, denominator: Array) -> tuple[Complex, Complex]:
    """Poles as centres and offsets: a repeated pole is one centre with its poles set around it, so that they are apart.

    Kept apart, centre and offset give the distance of two poles of a cluster without rounding.
    """
    centre, offset = poles.copy(), np.zeros_like(poles)
    for lane in np.flatnonzero(_closest(poles) < NEAR):
        for cluster in _clusters(poles[:, lane]):
            mean = _repeated(poles[cluster, lane], denominator[:, lane])
            if mean is not None:
                centre[cluster, lane] = mean
                offset[cluster, lane] = mean * _turns(len(cluster))
    return centre, offset


def _repeated(cluster: Complex, denominator: Array) -> complex | None:
    """The m-fold pole that a cluster stands for; None where its poles are really distinct."""
    count, mean = len(cluster), complex(cluster.mean())
    if np.abs(cluster - mean).max() > SPREAD * ROUNDING ** (1 / count) * abs(mean):
        return None
    if abs(mean.imag) < NEAR * abs(mean):
        mean = complex(mean.real)
    slope = denominator  # an m-fold root of D is a simple one of its (m-1)th derivative
    for _ in range(count - 1):
        slope = _derivative(slope)
    for _ in range(2):
        step = complex(horner(slope, np.array(mean)) / horner(_derivative(slope), np.array(mean)))
        mean = mean - step if abs(step) < NEAR * abs(mean) else mean
    return mean


def _derivative(coefficients: Array) -> Array:
    return np.asarray(coefficients[1:] * np.arange(1, len(coefficients)))


def _turns(count: int) -> Complex:
    """Where the roots of (s - p)^m = NUDGE p^m lie around p, relative to it.

    The response changes by about NUDGE, and loses ROUNDING / NUDGE^((m-1)/m) to the cancellation of residues.
    """
    turns = np.exp(2j * np.pi * np.arange(count) / count)
    turns.imag[np.abs(turns.imag) < ROUNDING * count] = 0.0  # conjugates are told by the sign of their imaginary parts
    return np.asarray(NUDGE ** (1 / count) * turns)


def _clusters(poles: Complex) -> list[NDArray[np.intp]]:
    """Indices of poles that hang together by steps shorter than `NEAR`, two and more at a time."""
    left = [index for index in range(len(poles)) if not np.isnan(poles[index])]
    found = []
    while left:
        cluster = [left.pop(0)]
        for member in cluster:
            size = abs(poles[member])
            joined = [index for index in left if abs(poles[index] - poles[member]) < NEAR * size]
            cluster += joined
            left = [index for index in left if index not in joined]
        if len(cluster) > 1:
            found.append(np.array(cluster))
    return found


def _closest(poles: Complex) -> Array:
    """Smallest distance between two poles of a lane, relative to the larger of them."""
    if len(poles) < 2:
        return np.full(poles.shape[1], np.inf)
    first, second = np.triu_indices(len(poles), 1)
    size = np.maximum(np.abs(poles[first]), np.abs(poles[second]))
    with np.errstate(divide="ignore", invalid="ignore"):
        distance = np.abs(poles[first] - poles[second]) / size
    return np.asarray(np.where(np.isnan(distance), np.inf, distance).min(axis=0))
