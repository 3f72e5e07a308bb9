"""Faults: the operating point again, with overrides, over every corner."""

from __future__ import annotations

from typing import Any

import numpy as np

from opto_ckt.circuit import Circuit
from opto_ckt.limits import Values
from opto_ckt.result import FoundFault


def run_faults(circuit: Circuit, values: Values, request: Any) -> tuple[FoundFault, ...]:
    """What each of the circuit's faults leads to, worst over the lanes of ``values``.

    A fault overrides values before bias and, for what bias itself decides, after it.
    """
    lanes = max(np.size(value) for value in values.values())
    found = []
    for fault in circuit.faults(request):
        overrides = {name: np.broadcast_to(value, lanes) for name, value in fault.overrides.items()}
        biased = circuit.bias({**values, **overrides}, request)
        outcome = circuit.outcome(fault, {**biased, **overrides}, request)
        found.append(FoundFault(fault.case, outcome.result, outcome.ok))
    return tuple(found)
