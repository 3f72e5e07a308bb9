"""Entries that primitives make in the nodal matrix, each a product of a row, a column and a weight."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

from opto_ckt.analyses.network.polynomial import Polynomial, negative_of, sum_of
from opto_ckt.analyses.network.primitives import GROUND, Primitive
from opto_ckt.analyses.network.program import Node, Program, Values

Pair = tuple[str, str]

CONDUCTANCE_SCALE = "conductance scale"  #: divides every current [S]
FREQUENCY_SCALE = "frequency scale"  #: divides s [rad/s]


@dataclass(frozen=True)
class Stamp:
    """weight × (row - row') (column - column')^T, the weight a polynomial in scaled s of at most first order.

    Rows are the nodes where a current is balanced and the branches whose equation is added; columns are the node
    voltages and the branch currents.
    """

    weight: Polynomial
    rows: Pair
    columns: Pair


def stamps_of(primitive: Primitive, program: Program) -> tuple[Stamp, ...]:
    """The entries of one primitive; that of its own value comes last."""
    return _STAMPS[primitive.kind](primitive, program)


def merge_parallel(stamps: Iterable[Stamp]) -> list[Stamp]:
    """Stamps between the same rows and columns become one, their weights added; those across one node go."""
    merged: dict[tuple[Pair, Pair], Polynomial] = {}
    for stamp in stamps:
        rows, columns, weight = stamp.rows, stamp.columns, stamp.weight
        if rows[0] == rows[1] or columns[0] == columns[1]:
            continue
        if rows[0] > rows[1]:
            rows, weight = rows[::-1], negative_of(weight)
        if columns[0] > columns[1]:
            columns, weight = columns[::-1], negative_of(weight)
        place = (rows, columns)
        merged[place] = sum_of(merged[place], weight) if place in merged else weight
    return [Stamp(weight, rows, columns) for (rows, columns), weight in merged.items()]


def _resistor(primitive: Primitive, program: Program) -> tuple[Stamp, ...]:
    ends = _ends(primitive)
    return (Stamp((1.0 / program.input(CONDUCTANCE_SCALE) / _value(primitive, program),), ends, ends),)


def _capacitor(primitive: Primitive, program: Program) -> tuple[Stamp, ...]:
    ends = _ends(primitive)
    scale = program.input(FREQUENCY_SCALE) / program.input(CONDUCTANCE_SCALE)
    return (Stamp((program.zero, _value(primitive, program) * scale), ends, ends),)


def _inductor(primitive: Primitive, program: Program) -> tuple[Stamp, ...]:
    out, back = _ammeter(primitive, program)
    scale = program.input(FREQUENCY_SCALE) * program.input(CONDUCTANCE_SCALE)
    return out, back, Stamp((program.zero, -(_value(primitive, program) * scale)), back.rows, out.columns)


def _transconductance(primitive: Primitive, program: Program) -> tuple[Stamp, ...]:
    weight = _value(primitive, program) * (1.0 / program.input(CONDUCTANCE_SCALE))
    return (Stamp((weight,), _ends(primitive), _control(primitive)),)


def _voltage_gain(primitive: Primitive, program: Program) -> tuple[Stamp, ...]:
    out, back = _ammeter(primitive, program)
    return out, back, Stamp((-_value(primitive, program),), back.rows, _control(primitive))


def _ammeter(primitive: Primitive, program: Program) -> tuple[Stamp, ...]:
    ends, current = _ends(primitive), (f"current of {primitive.name}", GROUND)
    return Stamp((program.one,), ends, current), Stamp((program.one,), current, ends)


def _value(primitive: Primitive, program: Program) -> Node:
    return program.node(primitive.value(Values(program)))


def _ends(primitive: Primitive) -> Pair:
    return primitive.nodes[0], primitive.nodes[1]


def _control(primitive: Primitive) -> Pair:
    return primitive.nodes[2], primitive.nodes[3]


_STAMPS = {
    "R": _resistor,
    "C": _capacitor,
    "L": _inductor,
    "G": _transconductance,
    "E": _voltage_gain,
    "V": _ammeter,
}
