"""One circuit with one request, ready to be evaluated on lanes of values."""

from __future__ import annotations

from collections.abc import Mapping
from functools import cached_property
from typing import Any

import numpy as np

from opto_ckt.analyses.corners import limits_of
from opto_ckt.analyses.network import Evaluation, Network
from opto_ckt.analyses.network.expansion import expand
from opto_ckt.circuit import Bench, Circuit, Fitted, with_blocks
from opto_ckt.circuits.blocks import blocks_of
from opto_ckt.derivation import Derivation
from opto_ckt.limits import Figures, Lanes, Limits, Values
from opto_ckt.topology import Topology


class Model:
    """What sizing evaluates: topology, compiled network, limits of everything that is not chosen.

    Parameters
    ----------
    circuit : of the registry.
    request : the design.
    moved : limits that are put in other places.
    fitted : names of the blocks that are fitted; all that the design asks for if None.
    """

    def __init__(
        self, circuit: Circuit, request: Any, moved: Limits | None = None, fitted: tuple[str, ...] | None = None
    ) -> None:
        self._plain = circuit
        self._moved = moved or {}
        self._networks: dict[tuple[str, ...], Network] = {}  #: compiled, by the blocks fitted
        self.request = request
        base = circuit.topology(request)
        self.places = (*base.slots, *base.taps)  #: names of the blocks that the circuit has a place for
        asked = blocks_of(request, self.places)
        self.blocks = {name: block for name, block in asked.items() if fitted is None or name in fitted}
        self.circuit = with_blocks(circuit, self.blocks)
        self.topology: Topology = self.circuit.topology(request).with_blocks({})

    @cached_property
    def limits(self) -> Limits:
        """All that is not chosen; asked for once nothing is refused, for a record may be missing till then."""
        return {**limits_of(self.topology, self.request), **self.circuit.given(self.request), **self._moved}

    def _with(self, fitted: tuple[str, ...]) -> Model:
        """The same circuit with some of its blocks."""
        if fitted == tuple(self.blocks):
            return self
        part = Model(self._plain, self.request, self._moved, fitted)
        part._networks = self._networks
        return part

    def proposal(self, derivation: Derivation) -> tuple[Fitted, ...]:
        """Exact values of every fitted part with their windows: the circuit's, then of one block after the other.

        The circuit is sized bare, each block around it and the blocks before.

        Raises
        ------
        InfeasibleError : no values exist that bias and stabilise the circuit.
        """
        fitted = self._plain.propose(self.request, derivation, self._with(()).bench())
        names = tuple(self.blocks)
        for count, block in enumerate(self.blocks.values(), 1):
            exact = {part.ref: part.exact for part in fitted}
            fitted += block.propose(self.request, derivation, self._with(names[:count]).bench(), exact)
        return fitted

    @property
    def network(self) -> Network:
        """The compiled network."""
        key = tuple(self.blocks)
        if key not in self._networks:
            self._networks[key] = Network(expand(self.topology))
        return self._networks[key]

    def moved(self, limits: Limits | None = None, fixed: Mapping[str, float] | None = None) -> Model:
        """The same model with some limits in other places, or some parts fixed."""
        request = self.request.model_copy(update={"fixed": {**self.request.fixed, **(fixed or {})}})
        return self.asked(request, limits)

    def asked(self, request: Any, moved: Limits | None = None) -> Model:
        """The same circuit for another request of the same structure; networks are compiled once."""
        other = Model(self._plain, request, moved)
        other._networks = self._networks
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
