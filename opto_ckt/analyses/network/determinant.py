r"""Determinants of a network by the two-graph method: no subtraction of like terms, so nothing is lost to rounding.

The nodal matrix is a sum of rank-one stamps, :math:`M = \sum_e y_e\, u_e v_e^T`, where u_e joins two rows (where the
current of e flows) and v_e two columns (the voltage that drives it). Its determinant is linear in every y_e:

.. math:: \det M = \det M|_{y_e = 0} + y_e \det M|_{u_e, v_e\ \text{contracted}}

Contracting merges two rows and two columns, with a sign. A state is how the labels still in reach have been merged;
equal states are expanded once. (W. Mayeda, Graph Theory, Wiley 1972, for the two graphs; from memory.)
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from opto_ckt.analyses.network.polynomial import Polynomial, difference_of, product_of, sum_of
from opto_ckt.analyses.network.primitives import GROUND
from opto_ckt.analyses.network.program import Node, Program
from opto_ckt.analyses.network.stamps import Pair, Stamp


class Determinants:
    """Expands the determinant of a nodal matrix, and its derivative with respect to any further stamp."""

    def __init__(self, stamps: Sequence[Stamp], program: Program) -> None:
        self._program = program
        stamps = elimination_order(stamps)
        self._stamps = stamps
        rows = _departures([stamp.rows for stamp in stamps])
        columns = _departures([stamp.columns for stamp in stamps])
        if len(rows.order) != len(columns.order):
            raise ValueError("the network has a node or branch that nothing determines")
        self._rows, self._columns = rows, columns
        self._steps = [
            (
                stamp.weight,
                rows.index[stamp.rows[0]],
                rows.index[stamp.rows[1]],
                columns.index[stamp.columns[0]],
                columns.index[stamp.columns[1]],
            )
            for stamp in stamps
        ]
        self._known: dict[tuple[int, int, tuple[int, ...], tuple[int, ...]], Polynomial] = {}

    def determinant(self, without: Stamp | None = None) -> Polynomial:
        """det M; with `without`, that of the network from which one stamp (or what it was merged into) is left out."""
        skipped = -1
        if without is not None:
            skipped = self._stamps.index(without)
        start = tuple(range(len(self._rows.order) + 1))
        return self._finish(self._expand(0, start, start, skipped))

    def derivative(self, rows: Pair, columns: Pair, factor: Node) -> Polynomial:
        """Derivative of det M by the weight of a stamp at the given rows and columns, times a factor."""
        start = tuple(range(len(self._rows.order) + 1))
        for label, known in ((rows, self._rows), (columns, self._columns)):
            for name in label:
                if name not in known.index:
                    raise ValueError(f"no primitive is connected to node {name!r}")
        contracted = _contract(
            start,
            start,
            0,
            0,
            self._rows.index[rows[0]],
            self._rows.index[rows[1]],
            self._columns.index[columns[0]],
            self._columns.index[columns[1]],
        )
        if contracted is None:
            return ()
        merged_rows, merged_columns, negative = contracted
        result = self._finish(self._expand(0, merged_rows, merged_columns, -1))
        return product_of((-factor if negative else factor,), result)

    def _finish(self, polynomial: Polynomial) -> Polynomial:
        """Coefficients that cancel for all values become zero, leading ones are dropped."""
        program = self._program
        checked = [program.zero if program.is_zero(term) else term for term in polynomial]
        while checked and checked[-1] is program.zero:
            checked.pop()
        return tuple(checked)

    def _expand(self, level: int, rows: tuple[int, ...], columns: tuple[int, ...], skipped: int) -> Polynomial:
        if level == len(self._steps):
            return (self._program.one,)
        key = (level, skipped if level <= skipped else -1, rows, columns)
        known = self._known.get(key)
        if known is not None:
            return known
        weight, row, other_row, column, other_column = self._steps[level]
        row_start, column_start = self._rows.start[level], self._columns.start[level]
        result: Polynomial = ()
        left_rows = self._rows.advance(rows, level)
        left_columns = self._columns.advance(columns, level)
        if left_rows is not None and left_columns is not None:
            result = self._expand(level + 1, left_rows, left_columns, skipped)
        if level != skipped:
            contracted = _contract(rows, columns, row_start, column_start, row, other_row, column, other_column)
            if contracted is not None:
                merged_rows = self._rows.advance(contracted[0], level)
                merged_columns = self._columns.advance(contracted[1], level)
                if merged_rows is not None and merged_columns is not None:
                    rest = self._expand(level + 1, merged_rows, merged_columns, skipped)
                    product = product_of(weight, rest)
                    result = difference_of(result, product) if contracted[2] else sum_of(result, product)
        self._known[key] = result
        return result


@dataclass(frozen=True)
class _Departures:
    """Labels numbered in the order in which the last stamp that touches them is passed; ground comes last."""

    order: list[str]
    index: dict[str, int]
    start: list[int]  #: by level, the first label still in reach

    def advance(self, merged: tuple[int, ...], level: int) -> tuple[int, ...] | None:
        """The state past a level; None where a label leaves unmerged, which makes the determinant zero."""
        first, after = self.start[level], self.start[level + 1]
        for offset in range(after - first):
            if merged[offset] == first + offset:
                return None
        return merged[after - first :]


def _departures(pairs: Sequence[Pair]) -> _Departures:
    last = {label: level for level, pair in enumerate(pairs) for label in pair if label != GROUND}
    order = sorted(last, key=lambda label: last[label])
    index = {label: position for position, label in enumerate(order)}
    index[GROUND] = len(order)
    start = [sum(1 for label in order if last[label] < level) for level in range(len(pairs) + 1)]
    return _Departures(order, index, start)


def _contract(
    rows: tuple[int, ...],
    columns: tuple[int, ...],
    row_start: int,
    column_start: int,
    row: int,
    other_row: int,
    column: int,
    other_column: int,
) -> tuple[tuple[int, ...], tuple[int, ...], bool] | None:
    """Merge two rows and two columns; with the sign of the cofactor, or None where they are one already."""
    row, other_row = rows[row - row_start], rows[other_row - row_start]
    column, other_column = columns[column - column_start], columns[other_column - column_start]
    if row == other_row or column == other_column:
        return None
    negative = False
    if row > other_row:
        row, other_row, negative = other_row, row, not negative
    if column > other_column:
        column, other_column, negative = other_column, column, not negative
    before = sum(1 for label in range(row_start, row) if rows[label - row_start] == label)
    before += sum(1 for label in range(column_start, column) if columns[label - column_start] == label)
    return (
        tuple([other_row if label == row else label for label in rows]),
        tuple([other_column if label == column else label for label in columns]),
        negative != bool(before % 2),
    )


def elimination_order(stamps: Sequence[Stamp]) -> list[Stamp]:
    """Stamps ordered so that few labels are in reach at any time: next comes what closes most and opens least."""
    labels = [
        [
            (side, label)
            for side, pair in (("row", stamp.rows), ("column", stamp.columns))
            for label in pair
            if label != GROUND
        ]
        for stamp in stamps
    ]
    left: dict[tuple[str, str], int] = {}
    for own in labels:
        for label in own:
            left[label] = left.get(label, 0) + 1
    opened: set[tuple[str, str]] = set()
    waiting = list(range(len(stamps)))
    order = []
    while waiting:

        def cost(position: int) -> tuple[int, int, int]:
            opens = sum(1 for label in labels[position] if label not in opened)
            closes = sum(1 for label in labels[position] if left[label] == 1)
            remaining = min((left[label] for label in labels[position]), default=0)
            return opens - closes, opens, remaining

        best = min(waiting, key=cost)
        waiting.remove(best)
        order.append(stamps[best])
        for label in labels[best]:
            opened.add(label)
            left[label] -= 1
    return order
