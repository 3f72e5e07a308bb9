"""Parts of laser drivers whose values come by common practice, what is refused at once, and the order of sizing."""

from __future__ import annotations

from math import inf
from typing import Generic, TypeVar

from opto_ckt.circuit import Bench, Fitted
from opto_ckt.circuits.drivers.budget import Share
from opto_ckt.circuits.drivers.pass_transistor import pass_transistor
from opto_ckt.circuits.drivers.requests import LoopRequest
from opto_ckt.circuits.drivers.side import side_of
from opto_ckt.circuits.drivers.slack import GATE
from opto_ckt.circuits.drivers.spread import resistor_spread
from opto_ckt.derivation import Derivation
from opto_ckt.errors import InfeasibleError
from opto_ckt.formulas import driver, supply_filter
from opto_ckt.parts.transistor import MosfetData
from opto_ckt.preferred import DIELECTRICS
from opto_ckt.request import LaserDriverRequest
from opto_ckt.units import write

SENSE_LEAD = 1e3  #: R4 from the sense node, and R9 like it ahead of the other input; common practice [Ω]
PULL_UP = 100e3  #: common practice [Ω]
BYPASS = 100e-9  #: at the op amp's supply pin, common practice [F]
FILTER_CAPACITANCE, FILTER_INDUCTANCE = 10e-6, 10e-6
"""Supply filter: its corner of 16 kHz lies below the frequencies of switching converters; common practice [F, H]"""

DAMPING = 0.7  #: least of the supply filter [1]

Asked = TypeVar("Asked", bound=LoopRequest, covariant=True)


def refuse_unsuited(request: LoopRequest, bench: Bench) -> None:
    """Refuse an op amp that needs gain, and a transistor that the supply would break."""
    gain, supply, data = bench.nominal("U1.minimum_stable_gain"), bench.high("supply.positive"), request.transistor
    if gain > 1:
        raise InfeasibleError(
            f"the noise gain falls to 1 through C1, U1 is stable from {gain:g} on",
            ["an amplifier that is stable at a gain of 1"],
        )
    span = supply - bench.low("supply.negative")
    limits = {"voltage_max": (data.voltage_max, supply)}
    if isinstance(data, MosfetData):
        limits["gate_voltage_max"] = (data.gate_voltage_max, span)
    for name, (limit, reached) in limits.items():
        if reached > limit:
            raise InfeasibleError(
                f"a fault puts {write(reached, 'V')} on the transistor, its {name} is {write(limit, 'V')}",
                [f"transistor.{name} ≥ {write(reached, 'V')}", "a lower conditions.supply"],
            )


class Sizing(Generic[Asked]):
    """Parts in the order in which they are sized; what the design file fixes is kept."""

    def __init__(self, request: Asked, derivation: Derivation) -> None:
        self.request, self.derivation = request, derivation
        self.parts: dict[str, Fitted] = {}

    def __getitem__(self, ref: str) -> float:
        return self.parts[ref].exact

    def fit(self, ref: str, exact: float, stock: str, low: float = 0.0, high: float = inf, why: str = "") -> None:
        """One part; ``why`` for those that no formula gives."""
        fixed = self.request.fixed.get(ref)
        if fixed is not None:
            self.derivation.note(ref, "fixed in the design file")
        elif why:
            self.derivation.note(ref, why)
        series = getattr(self.request.preferred, stock).series
        value = exact if fixed is None else fixed
        self.parts[ref] = Fitted(ref, value, series, low=low, high=high, fixed=fixed is not None)

    def known(self, ref: str, otherwise: float) -> float:
        """The value that the design file fixes, else another."""
        return self.request.fixed.get(ref, otherwise)


def fit_current(sizing: Sizing[LaserDriverRequest], bench: Bench, share: Share) -> None:
    """R1 for the sense voltage, R7 in its window."""
    nominal = {name: bench.nominal(name) for name in bench.limits}
    alpha = float(pass_transistor(sizing.request.transistor).share(nominal))
    exact = sizing.derivation.compute(
        "R1",
        driver.sense_resistance,
        reason=f"{write(share.sense, 'V')} / {write(share.asked / alpha, 'A')}; "
        + sizing.derivation.reasons.get("sense voltage", ""),
        reference=share.sense,
        current=share.asked / alpha,
    )
    sizing.fit("R1", exact, "resistors", low=0.93 * exact, high=1.07 * exact)
    least, most = share.series
    sizing.fit("R7", least, "resistors", low=least, high=most)


def fit_common(sizing: Sizing[LaserDriverRequest]) -> None:
    """Values by common practice."""
    lead = sizing.known("R4", SENSE_LEAD)
    sizing.fit("R4", SENSE_LEAD, "resistors", SENSE_LEAD, SENSE_LEAD, "common practice: lets C1 take over the loop")
    why = "like R4: equal drops of the input bias currents; keeps C2 from feeding U1's input when the supply fails"
    sizing.fit("R9", lead, "resistors", lead, lead, why)
    sizing.fit("R5", GATE, "resistors", GATE, GATE, "common practice: parts U1 from the capacitance of Q1")
    if sizing.request.signal.enable:
        why = "common practice: an open input keeps the laser off"
        sizing.fit("R11", PULL_UP, "resistors", PULL_UP, PULL_UP, why)
        if side_of(sizing.request) == "high":
            sizing.fit("R12", PULL_UP, "resistors", PULL_UP, PULL_UP, "common practice: Q2 off unless Q3 conducts")
    sizing.fit("C8", BYPASS, "bypass", BYPASS, BYPASS, "common practice: 100 nF close to the supply pin")
    if sizing.request.conditions.supply.negative:
        sizing.fit("C9", BYPASS, "bypass", BYPASS, BYPASS, "common practice: 100 nF close to the supply pin")


def fit_filter(sizing: Sizing[LaserDriverRequest]) -> None:
    """L1 and C3 by their corner, R8 across L1 for the damping."""
    request, derivation = sizing.request, sizing.derivation
    capacitance, inductance = sizing.known("C3", FILTER_CAPACITANCE), sizing.known("L1", FILTER_INDUCTANCE)
    derivation.compute(
        "filter corner", supply_filter.filter_corner, inductance=inductance, capacitance=capacitance,
        reason="below the frequencies of switching converters",
    )  # fmt: skip
    why = "common practice: corner at 16 kHz with {}, below switching converters; R7 keeps C3 from the laser"
    sizing.fit("C3", capacitance, "bypass", capacitance, capacitance, why.format("L1"))
    sizing.fit("L1", inductance, "inductors", inductance, inductance, why.format("C3"))
    least = inductance * (1 - request.preferred.inductors.tolerance)
    most = (capacitance + BYPASS) * (1 + capacitor_spread(request))
    exact = derivation.compute(
        "R8", supply_filter.damping_resistance, reason=f"ζ ≥ {DAMPING} with L1 at its least, C3 and C8 at their most",
        inductance=least, capacitance=most, damping=DAMPING,
    )  # fmt: skip
    exact /= 1 + resistor_spread(request)
    sizing.fit("R8", exact, "resistors", low=0.9 * exact, high=exact)


def capacitor_spread(request: LoopRequest) -> float:
    """How far a bypass capacitor may lie above its value: tolerance and dielectric. [1]"""
    stock = request.preferred.bypass
    return float(stock.tolerance + max(DIELECTRICS[stock.dielectric].change_high, 0.0))
