"""What circuits and blocks are: structure, sizing, bias, figures and faults, each a plain function of a request."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass, field, replace
from functools import reduce
from operator import or_
from typing import TYPE_CHECKING, Any

import numpy as np

from opto_ckt.derivation import Derivation
from opto_ckt.limits import Evaluate, Figures, Lanes, Limit, Limits, Requirement, Values
from opto_ckt.preferred import Series
from opto_ckt.topology import Topology

if TYPE_CHECKING:
    from opto_ckt.analyses.network.evaluation import Evaluation


@dataclass(frozen=True)
class Fitted:
    """The exact value that one part ought to have, and the window that its preferred value must lie in."""

    ref: str
    exact: float
    series: Series
    low: float = 0.0
    high: float = np.inf
    omittable: bool = False  #: may be left out (value zero) where nothing, or strays alone, do the work
    fixed: bool = False  #: the engineer insists on ``exact``
    twin: str = ""  #: designator of the part whose value it shares, since the two have to match


class OnDemand(Mapping[str, Lanes]):
    """Figures that are properties of an object, each computed when it is looked up."""

    def __init__(self, owner: object, names: tuple[str, ...]) -> None:
        self._owner, self._names = owner, names

    def __getitem__(self, name: str) -> Lanes:
        if name not in self._names:
            raise KeyError(name)
        return np.atleast_1d(getattr(self._owner, name))

    def __iter__(self) -> Iterator[str]:
        return iter(self._names)

    def __len__(self) -> int:
        return len(self._names)


@dataclass(frozen=True)
class Bench:
    """What a circuit is sized on: every limit but those of its fitted parts, and its figures at nominal."""

    limits: Limits
    evaluate: Evaluate  #: figures at nominal for any values of the fitted parts, one or many lanes

    def nominal(self, name: str) -> float:
        """Nominal value of one limit."""
        return float(self.limits[name].at("nominal", 0.0))

    def low(self, name: str) -> float:
        """Least value of one limit."""
        return float(self.limits[name].at("low", 0.0))

    def high(self, name: str) -> float:
        """Greatest value of one limit."""
        return float(self.limits[name].at("high", 0.0))


@dataclass(frozen=True)
class Stress:
    """Worst-case load on one part."""

    ref: str
    power: Lanes | float = 0.0  #: [W]
    voltage: Lanes | float = 0.0  #: [V]
    current: Lanes | float = 0.0  #: [A]


@dataclass(frozen=True)
class Heat:
    """Dissipation of one part and how warm it gets."""

    ref: str
    power: Lanes | float  #: [W]
    temperature: Lanes | float  #: of junction or film [K]
    limit: float  #: [K]


@dataclass(frozen=True)
class Fault:
    """One thing that goes wrong, as overrides of values."""

    case: str
    overrides: Values
    restrict: Mapping[str, float] = field(default_factory=dict)  #: values held whatever the corner


@dataclass(frozen=True)
class Refusal:
    """Something a design file asks for that the circuit does not do."""

    path: tuple[str, ...]  #: of the key
    message: str


@dataclass(frozen=True)
class FaultOutcome:
    """What a fault does, lane by lane."""

    result: str  #: one sentence with the worst figures reached and what limits them
    ok: bool  #: no part beyond its limit
    light: Lanes | float = 0.0  #: that the source gives, at the plane of its sheet [W]


@dataclass(frozen=True)
class Circuit:
    """One circuit of the registry.

    A request is a design file read and checked against ``request``; every function below takes one.
    """

    name: str
    title: str
    request: type[Any]
    topology: Callable[[Any], Topology]
    offers: tuple[str, ...]  #: names of the figures it promises
    given: Callable[[Any], dict[str, Limit]]  #: what no data sheet gives: strays, loads; may refine a sheet's limits
    propose: Callable[[Any, Derivation, Bench], tuple[Fitted, ...]]
    bias: Callable[[Values, Any], dict[str, float | Lanes]]
    figures: Callable[[Values, Evaluation, Any], Figures]
    implied: Callable[[Any], tuple[Requirement, ...]]  #: must hold even where nobody asks: no part beyond its limit
    stresses: Callable[[Values, Any], tuple[Stress, ...]]
    heat: Callable[[Values, Any], tuple[Heat, ...]]
    faults: Callable[[Any], tuple[Fault, ...]]
    outcome: Callable[[Fault, Values, Any], FaultOutcome]
    levers: tuple[str, ...]  #: limits and parts that an engineer would move to meet a missed bound
    remarks: Callable[[Values, Limits, Any], tuple[str, ...]]  #: cautions and advice that depend on the values
    noise_frequency: Callable[[Any], float]  #: where densities are stated [Hz]
    noise_band: Callable[[Any], tuple[float, float]]  #: over which noise is summed [Hz]
    not_checked: tuple[str, ...]
    formulas: tuple[Callable[..., Any], ...]  #: sizing relations, for the page of formulas
    starter: str  #: values of a design file to start from, as TOML
    refused: Callable[[Any], tuple[Refusal, ...]] = lambda request: ()  #: what it was asked for and does not do
    input_capacitance: Callable[[Any, Bench], Mapping[str, float]] | None = None  #: itemised, of a summing node [F]
    eye_safety: Callable[[Values, Any, float], tuple[str, ...]] = lambda values, request, fault: ()
    """Advice on the light of a source, given the greatest that a fault leads to [W]."""
    settled: Callable[[Any, Callable[[Any], Figures]], Any] = lambda request, figures: request
    """The request with what it leaves to be found by trial, given the nominal figures of any request sized."""


@dataclass(frozen=True)
class Block:
    """Something fitted to a circuit that asks for it: its own parts between nodes ``in`` and ``out``, and their sizing.

    It knows no circuit, only the request; the circuit's topology has a slot or a tap of its name.
    """

    name: str  #: of its table under [blocks]
    topology: Callable[[Any], Topology]
    propose: Callable[[Any, Derivation, Bench, Values], tuple[Fitted, ...]]  #: the last: exact values of all else
    given: Callable[[Any], dict[str, Limit]] = lambda request: {}
    bias: Callable[[Values, Any], dict[str, float | Lanes]] = lambda values, request: {}  #: what it adds to the values
    implied: Callable[[Any], tuple[Requirement, ...]] = lambda request: ()
    stresses: Callable[[Values, Any], tuple[Stress, ...]] = lambda values, request: ()
    heat: Callable[[Values, Any], tuple[Heat, ...]] = lambda values, request: ()
    remarks: Callable[[Values, Limits, Any], tuple[str, ...]] = lambda values, limits, request: ()
    refused: Callable[[Any], tuple[Refusal, ...]] = lambda request: ()
    formulas: tuple[Callable[..., Any], ...] = ()


def with_blocks(circuit: Circuit, blocks: Mapping[str, Block]) -> Circuit:
    """The circuit with blocks in their places; only its `propose` stays that of the circuit without them."""
    if not blocks:
        return circuit
    fitted = tuple(blocks.values())
    everything: tuple[Circuit | Block, ...] = (circuit, *fitted)

    def bias(values: Values, request: Any) -> dict[str, float | Lanes]:
        found = circuit.bias(values, request)
        for block in fitted:
            found = {**found, **block.bias(found, request)}
        return found

    return replace(
        circuit,
        topology=lambda request: circuit.topology(request).with_blocks(
            {block.name: block.topology(request) for block in fitted}
        ),
        given=lambda request: reduce(or_, (each.given(request) for each in everything)),
        bias=bias,
        implied=lambda request: sum((each.implied(request) for each in everything), ()),
        stresses=lambda values, request: sum((each.stresses(values, request) for each in everything), ()),
        heat=lambda values, request: sum((each.heat(values, request) for each in everything), ()),
        remarks=lambda values, limits, request: sum((each.remarks(values, limits, request) for each in everything), ()),
        refused=lambda request: sum((each.refused(request) for each in everything), ()),
        formulas=tuple(dict.fromkeys(formula for each in everything for formula in each.formulas)),
    )
