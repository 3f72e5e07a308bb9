"""Symbolic algebra: the designer's formulas, and a second road to every network function.

Nothing here is on the way of sizing a design; sympy and lcapy are imported by this package alone.
"""

from __future__ import annotations

from opto_ckt.analyses.symbolic.closed_forms import formula_expression
from opto_ckt.analyses.symbolic.networks import (
    S,
    SymbolicNetwork,
    lcapy_circuit,
    lcapy_transfer,
    symbolic_return_ratio,
    symbolic_transfer,
)
from opto_ckt.analyses.symbolic.writing import coefficients, latex, readable, renamed, value_of

__all__ = [
    "S", "SymbolicNetwork", "coefficients", "formula_expression", "latex", "lcapy_circuit", "lcapy_transfer",
    "readable", "renamed", "symbolic_return_ratio", "symbolic_transfer", "value_of",
]  # fmt: skip
