from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from opto_ckt.analyses.network.program import Node, Program
from opto_ckt.analyses.network.tape import BLOCK, Tape


def test_equal_expressions_are_one_node():
    program = Program()
    a, b = program.input("a"), program.input("b")
    assert a * b + a is a + b * a
    assert a - (-b) is b + a
    assert (-a) * b is -(a * b)
    assert a - a is program.zero
    assert -(a - b) is b - a


def test_constants_are_folded():
    program = Program()
    a = program.input("a")
    assert program.node(2.0) * 3.0 is program.node(6.0)
    assert 1.0 * a is a
    assert a * 0.0 is program.zero
    assert a + 0.0 is a
    assert (a / 1.0) is a


def test_whole_powers_only():
    program = Program()
    a = program.input("a")
    assert a**3 is a * a * a
    assert a**-2 is 1.0 / (a * a)
    assert a**0 is program.one
    with pytest.raises(ValueError, match="whole powers"):
        a**0.5  # type: ignore[operator]  # what is refused


def test_zero_test_sees_cancellation():
    program = Program()
    a, b = program.input("a"), program.input("b")
    square = (a + b) ** 2 - a * a - b * b
    assert not program.is_zero(square)
    assert program.is_zero(square - 2.0 * a * b)
    assert program.is_zero(a / b * b - a)
    assert not program.is_zero(a / b - b / a)


leaves = st.one_of(st.sampled_from("abc"), st.floats(-3, 3).map(lambda x: round(x, 2)))
expressions = st.recursive(leaves, lambda inner: st.tuples(st.sampled_from("+-*/"), inner, inner), max_leaves=25)


def _built(expression, values):
    """The expression on whatever the values are; division kept away from zero by squaring and adding 1."""
    if isinstance(expression, tuple):
        operation, *operands = expression
        left, right = (_built(operand, values) for operand in operands)
        if operation == "+":
            return left + right
        if operation == "-":
            return left - right
        if operation == "*":
            return left * right
        return left / (right * right + 1.0)
    return values[expression] if isinstance(expression, str) else expression


@given(expressions, st.lists(st.floats(-2, 2), min_size=3, max_size=3))
def test_tape_computes_the_expression(expression, numbers):
    program = Program()
    values = dict(zip("abc", numbers, strict=True))
    node = program.node(_built(expression, {name: program.input(name) for name in "abc"}))
    assert isinstance(node, Node)
    (result,) = Tape(program, [node]).run(values)
    expected = _built(expression, values)
    assert result == pytest.approx(expected, rel=1e-9, abs=1e-9 * _size(expression, values))


def _size(expression, values):
    """A bound of every term on the way, for the rounding that a sum of opposite terms is allowed."""
    if isinstance(expression, tuple):
        left, right = (_size(operand, values) for operand in expression[1:])
        return max(1.0, left + right, left * right)
    return abs(values[expression] if isinstance(expression, str) else expression)


def test_lanes_run_in_blocks_like_floats():
    program = Program()
    a, b = program.input("a"), program.input("b")
    tape = Tape(program, [a * b - 1.0 / a, a + b, b, program.node(4.0), a])
    lanes = np.linspace(1, 2, 2 * BLOCK + 3)
    table = tape.run_lanes({"a": lanes, "b": 3.0}, len(lanes))
    assert table.shape == (5, len(lanes))
    for lane in (0, BLOCK, len(lanes) - 1):
        assert table[:, lane].tolist() == tape.run({"a": float(lanes[lane]), "b": 3.0})


def test_division_by_zero_gives_infinity_for_floats_too():
    program = Program()
    tape = Tape(program, [1.0 / program.input("a")])
    assert math.isinf(tape.run_lanes({"a": 0.0}, 1)[0, 0])
