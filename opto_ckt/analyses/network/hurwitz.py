r"""Moments of 1/|D|² in closed form, whose elimination is the stability test at the same time.

.. math:: M_k = \int_0^\infty \frac{\omega^{2k}}{|D(j\omega)|^2} d\omega, \quad k = 0 \ldots n - 1

With :math:`\mu_j = (-1)^j M_j` the even part of :math:`(j\omega)^m D(-j\omega) / |D|^2 = (j\omega)^m / D(j\omega)`
integrates to zero for m < n - 1 (close the path in the right half-plane) and to half a circle's worth for m = n - 1.
Row m of that system holds the coefficient of order 2j - m in column j: Hurwitz's matrix. D is stable exactly if all
pivots of its elimination are positive. Derived.
"""

from __future__ import annotations

from functools import cache
from math import pi

import numpy as np
from numpy.typing import NDArray

from opto_ckt.analyses.network.lanes import Array, by_order
from opto_ckt.analyses.network.program import Node, Program
from opto_ckt.analyses.network.tape import Tape

Mask = NDArray[np.bool_]


def hurwitz_moments(denominator: Array) -> tuple[Array, Mask]:
    """Moments by k, shape (order, lanes) but one row at least, and whether each lane is stable.

    Moments are nan where a lane is unstable and infinite past its own order.
    """
    order, lanes = len(denominator) - 1, denominator.shape[1]
    moments = np.full((max(order, 1), lanes), np.nan)
    stable = np.zeros(lanes, dtype=bool)
    for low, high, group in by_order(denominator):
        if low == 0:
            own = denominator[: high + 1, group]
            table = _moments_and_pivots(high).run_rows(own * np.sign(own[-1]))
            positive = (table[high:] > 0).all(axis=0) & (own[0] * own[-1] > 0)
            moments[:high, group] = np.where(positive, table[:high], np.nan)
            moments[high:, group] = np.where(positive, np.inf, np.nan)
            stable[group] = positive
    return moments, stable


@cache
def _moments_and_pivots(order: int) -> Tape:
    """Program of the moments, then of the pivots, for any D of one order."""
    program = Program()
    coefficients = [program.input(str(power)) for power in range(order + 1)]
    matrix: dict[tuple[int, int], Node] = {
        (row, column): coefficients[2 * column - row]
        for row in range(order)
        for column in range(order)
        if 0 <= 2 * column - row <= order
    }
    for step in range(order):
        for row in range(step + 1, order):
            if (row, step) in matrix:
                factor = matrix[row, step] / matrix[step, step]
                for column in range(step + 1, order):
                    if (step, column) in matrix:
                        matrix[row, column] = matrix[row, column] - factor * matrix[step, column]
    solution: dict[int, Node] = {}
    for step in reversed(range(order)):
        right = program.zero
        if step == order - 1:
            right = program.node(pi / 2 if order % 2 else -pi / 2) / coefficients[order]
        for column in range(step + 1, order):
            if (step, column) in matrix:
                right = right - matrix[step, column] * solution[column]
        solution[step] = right / matrix[step, step]
    moments = [-solution[step] if step % 2 else solution[step] for step in range(order)]
    return Tape(program, moments + [matrix[step, step] for step in range(order)])
