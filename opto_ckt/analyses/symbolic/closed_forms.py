"""Closed forms as expressions: the very functions that compute, run on symbols."""

from __future__ import annotations

from collections.abc import Callable
from inspect import signature
from types import FunctionType
from typing import Any

import sympy

REBOUND = {"sqrt": sympy.sqrt, "log": sympy.log, "exp": sympy.exp, "arctan": sympy.atan, "pi": sympy.pi}

CONSTANTS = {
    "ELEMENTARY_CHARGE": sympy.Symbol("q", positive=True),
    "BOLTZMANN": sympy.Symbol("k", positive=True),
    "PLANCK": sympy.Symbol("h", positive=True),
    "LIGHT_SPEED": sympy.Symbol("c", positive=True),
}
"""What a printed formula writes for the names of `opto_ckt.constants`."""


def formula_expression(formula: Callable[..., Any]) -> Any:
    """A closed form as an expression of symbols named as its parameters: the function itself, run on symbols.

    Constants appear as q, k, h, c; decimal numbers as fractions.
    """
    symbols = {name: sympy.Symbol(name, positive=True) for name in signature(formula).parameters}
    return sympy.nsimplify(_rebound(formula)(**symbols), rational=True)


def _rebound(formula: Callable[..., Any]) -> Callable[..., Any]:
    """The same function with the names it uses bound to what takes symbols."""
    if not isinstance(formula, FunctionType):
        raise TypeError(f"{formula!r} is not a plain function")
    rebound = FunctionType(formula.__code__, formula.__globals__ | REBOUND | CONSTANTS, formula.__name__)
    rebound.__kwdefaults__ = formula.__kwdefaults__
    return rebound
