"""Faults: the operating point again, with overrides, over every corner."""

from __future__ import annotations

from typing import Any

import numpy as np

from opto_ckt.circuit import Circuit
from opto_ckt.limits import Values
from opto_ckt.result import FoundFault


def run_faults(circuit: Circuit, values: Values, request: Any) -> tuple[FoundFault, ...]:
    """What each of the circuit's faults leads to, worst over the lanes of ``values``.

    A fault overrides values before bias and, for what bias itself decides, after it. An override that is a column of
    several rows is a sweep: every lane is run at each of its rows.
    """
    lanes = max(np.size(value) for value in values.values())
    found = []
    for fault in circuit.faults(request):
        rows = max((np.shape(value)[0] for value in fault.overrides.values() if np.ndim(value) == 2), default=1)
        swept = {name: np.tile(np.broadcast_to(value, lanes), rows) for name, value in values.items()}
        overrides = {name: np.broadcast_to(value, (rows, lanes)).ravel() for name, value in fault.overrides.items()}
        biased = circuit.bias({**swept, **overrides}, request)
        outcome = circuit.outcome(fault, {**biased, **overrides}, request)
        found.append(FoundFault(fault.case, outcome.result, outcome.ok, float(np.max(outcome.light))))
    return tuple(found)
