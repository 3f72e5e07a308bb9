"""One circuit with one request, ready to be evaluated on lanes of values."""

from __future__ import annotations

from collections.abc import Mapping
from functools import cached_property
from typing import Any

import numpy as np

from opto_ckt.analyses.corners import limits_of
from opto_ckt.analyses.network import Evaluation, Network
from opto_ckt.analyses.network.expansion import expand
from opto_ckt.circuit import Bench, Circuit
from opto_ckt.limits import Figures, Lanes, Limits, Values
from opto_ckt.topology import Topology


class Model:
    """What sizing evaluates: topology, compiled network, limits of everything that is not chosen."""

    def __init__(self, circuit: Circuit, request: Any, moved: Limits | None = None) -> None:
        self.circuit = circuit
        self.request = request
        self.topology: Topology = circuit.topology(request).with_blocks({})
        self.limits: Limits = {**limits_of(self.topology, request), **circuit.given(request), **(moved or {})}

    @cached_property
    def network(self) -> Network:
        """The compiled network."""
        return Network(expand(self.topology))

    def moved(self, limits: Limits | None = None, fixed: Mapping[str, float] | None = None) -> Model:
        """The same model with some limits in other places, or some parts fixed; the network is compiled once."""
        request = self.request.model_copy(update={"fixed": {**self.request.fixed, **(fixed or {})}})
        other = Model(self.circuit, request, limits)
        other.__dict__["network"] = self.network
        return other

    def biased(self, values: Values) -> dict[str, float | Lanes]:
        """Values with all that the operating point decides."""
        return self.circuit.bias(values, self.request)

    def evaluation(self, biased: Values) -> Evaluation:
        """Network functions at the operating point."""
        return self.network.evaluate(biased)

    def evaluate(self, values: Values) -> Figures:
        """Every figure that the circuit offers, one entry a lane of ``values``."""
        biased = self.biased(values)
        return self.circuit.figures(biased, self.evaluation(biased), self.request)

    def nominal(self) -> dict[str, float]:
        """Every limit at nominal."""
        return {name: float(limit.at("nominal", 0.0)) for name, limit in self.limits.items()}

    def bench(self) -> Bench:
        """What a circuit sizes itself on."""

        def evaluate(chosen: Values) -> Figures:
            lanes = max(np.size(value) for value in chosen.values())
            wide: Mapping[str, Lanes] = {name: np.broadcast_to(value, lanes) for name, value in chosen.items()}
            return self.evaluate({**self.nominal(), **wide})

        return Bench(self.limits, evaluate)
