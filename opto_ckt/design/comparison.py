"""What other circuits would give for the same request with the same parts, one line each."""

from __future__ import annotations

from collections.abc import Callable, Collection
from typing import Any

from opto_ckt.analyses.faults import run_faults
from opto_ckt.circuit import Circuit
from opto_ckt.design.model import Model
from opto_ckt.design.sizing import Sized, choose_values, settled
from opto_ckt.errors import InfeasibleError
from opto_ckt.figures import FIGURES
from opto_ckt.limits import Requirement, one_at_a_time, values_at
from opto_ckt.parts.record import facts
from opto_ckt.request import Request
from opto_ckt.result import Alternative
from opto_ckt.units import write

TOLD = (
    "bandwidth", "sensitivity", "nep_density", "overload",
    "current", "optical_power", "dissipation", "junction_temperature",
)  # fmt: skip
"""Figures that a line tells at nominal, as far as the circuit has them."""

OUT_OF_REACH = -1e8  #: margins below stand for a figure that does not exist at a corner


def alternatives(
    request: Request, circuits: Collection[str], load: Callable[[str], Circuit]
) -> tuple[Alternative, ...]:
    """A line for every other circuit whose design file has the same tables, in the order of the registry."""
    family = next(kind for kind in type(request).__mro__ if kind.__bases__ == (Request,))
    others = [load(name) for name in circuits if name != request.circuit]
    return tuple(_alternative(request, circuit) for circuit in others if issubclass(circuit.request, family))


def _alternative(request: Request, circuit: Circuit) -> Alternative:
    given = {name: getattr(request, name) for name in type(request).model_fields}
    required = {name: limit for name, limit in request.require.items() if name in circuit.offers}
    kind: type[Request] = circuit.request
    tables = {**given, "circuit": circuit.name, "require": required, "fixed": {}}
    missing = [name for name, fact in facts(kind).items() if fact.needed and tables.get(name) is None]
    if missing:
        return Alternative(circuit.name, f"needs {', '.join(f'[{name}]' for name in missing)}")
    known = {name: value for name, value in tables.items() if name in kind.model_fields}
    wrong = [finding.message for finding in kind.disagreements(known)]
    asked: Any = kind.model_construct(**known)
    wrong += [refusal.message for refusal in circuit.refused(asked)] if not wrong else []
    if wrong:
        return Alternative(circuit.name, f"does not go: {wrong[0]}")
    model = Model(circuit, asked)
    unplaced = [name for name in asked.blocks_asked if name not in model.blocks]
    if unplaced:
        return Alternative(circuit.name, f"has no place for {', '.join(unplaced)}")
    try:
        return _line(choose_values(settled(model)))
    except InfeasibleError as error:
        return Alternative(circuit.name, f"does not go: {error.reason}")


def _line(sized: Sized) -> Alternative:
    """Verdict with the bound that is missed by most, and a few figures at nominal."""
    model, choice = sized.model, sized.choice
    figures = model.bench().evaluate(choice.values)
    told = {name: float(figures[name][0]) for name in TOLD if name in model.circuit.offers}
    needs = list(zip(choice.margins, sized.requirements, strict=True))
    margin, need = min(needs, key=lambda pair: pair[0], default=(0.0, None))
    verdict = "meets all that it offers" if need is None or margin >= 0 else _missed(need, margin)
    return Alternative(model.circuit.name, verdict, told, len(model.topology.fitted), _faults(sized))


def _faults(sized: Sized) -> tuple[int, int]:
    """How many faults pass a limit with each limit alone at its ends, of how many."""
    circuit, request = sized.model.circuit, sized.model.request
    found = run_faults(circuit, values_at(sized.limits, one_at_a_time(sized.limits), sized.choice.values), request)
    return sum(not fault.ok for fault in found), len(found)


def _missed(need: Requirement, margin: float) -> str:
    unit = FIGURES[need.figure].unit
    reached = need.bound + (1 if need.side == "min" else -1) * margin * max(abs(need.bound), need.scale)
    found = write(reached, unit) if margin > OUT_OF_REACH else "has none"
    return f"misses {need.figure}: {found}, {need.side} {write(need.bound, unit)}"
