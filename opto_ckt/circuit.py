"""What a circuit is: structure, sizing, bias, figures and faults, each a plain function of a request."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass, field
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
