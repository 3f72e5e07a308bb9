"""Poles of every lane, and the residues of the step response at them."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from opto_ckt.analyses.network.lanes import Array, Complex, Lanes, by_order, horner

CLOSE = 0.1
"""Poles closer than this, relative to their size, may be one repeated pole that rounding has spread."""

NUDGE = 1e-9
"""Relative change of the constant term that parts repeated poles; the response is off by about as much."""


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
    poles = poles.copy()
    close = np.flatnonzero(_closest(poles) < CLOSE)
    if len(close):
        parted = denominator[:, close].copy()
        parted[0] *= 1 + NUDGE
        poles[:, close] = poles_of(parted)
    present = ~np.isnan(poles)
    at = np.where(present, poles, 1.0)
    apart = at[:, None] - at[None, :]
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
    return np.linalg.eigvals(matrix).astype(complex).T


def _polished(roots: Complex, coefficients: Array) -> Complex:
    """Two Newton steps, each kept where it moves a root by little: eigenvalues of widely spread roots are inexact."""
    slope = coefficients[1:] * np.arange(1, len(coefficients))[:, None]
    for _ in range(2):
        with np.errstate(divide="ignore", invalid="ignore"):
            step = horner(coefficients, roots) / horner(slope, roots)
        roots = np.where(np.abs(step) < 1e-2 * np.abs(roots), roots - step, roots)
    return roots


def _closest(poles: Complex) -> Array:
    """Smallest distance between two poles of a lane, relative to the larger of them."""
    if len(poles) < 2:
        return np.full(poles.shape[1], np.inf)
    first, second = np.triu_indices(len(poles), 1)
    size = np.maximum(np.abs(poles[first]), np.abs(poles[second]))
    with np.errstate(divide="ignore", invalid="ignore"):
        distance = np.abs(poles[first] - poles[second]) / size
    return np.asarray(np.where(np.isnan(distance), np.inf, distance).min(axis=0))
