"""Exact values of every range's feedback, each in its own window with all contacts in their positions."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace

from opto_ckt.circuit import Bench, Fitted
from opto_ckt.circuits.receivers.board import level_values, surroundings
from opto_ckt.circuits.receivers.feedback.pair import Pair, feedback_pair
from opto_ckt.circuits.receivers.feedback.stage import Stage, summing_node
from opto_ckt.circuits.receivers.tia_switched.structure import Branch, branches
from opto_ckt.derivation import Derivation
from opto_ckt.errors import InfeasibleError
from opto_ckt.formulas import feedback_network, front_end, loop, second_order, transimpedance, transimpedance_limits
from opto_ckt.limits import Lanes, Limit, Values
from opto_ckt.parts.record import Spread
from opto_ckt.request import SwitchedRequest
from opto_ckt.request.reading import Limit as Bounds
from opto_ckt.units import write

ABSENT = 1e12  #: resistance of a branch that is not sized yet [Ω]
NOTHING = 1e-18  #: its capacitance [F]
NOISE = ("input_noise_density", "nep_density")  #: required of the faintest range alone
PASSES = 2  #: the faintest range meets the branches, they meet it


def summing_capacitance(request: SwitchedRequest, bench: Bench) -> dict[str, float]:
    """Capacitance of the summing node by where it comes from, nominal; open branches put their contacts' on it. [F]"""
    items = summing_node(request, bench)
    return items | {f"{branch.switch} open": bench.nominal(f"{branch.switch}.terminal_capacitance")
                    for branch in branches(request)}  # fmt: skip


def propose(request: SwitchedRequest, derivation: Derivation, bench: Bench) -> tuple[Fitted, ...]:
    """Every fitted part with its exact value and window.

    Raises
    ------
    InfeasibleError : the output has no headroom in a range, or no C damps it and keeps the op amp stable.
    """
    level = level_values(request, derivation, bench)
    found = branches(request)
    parts: dict[str, float] = {}
    for branch in found:
        parts |= {branch.resistor: ABSENT, branch.capacitor: NOTHING, branch.closed: 0.0}
    others: dict[str, float] = {**level, **parts}
    fitted: dict[str, Fitted] = {}
    for _ in range(PASSES):
        stage = _stage(request, derivation, bench, 0, _without(others, "R1", "C1"))
        resistance, capacitor = _sized(stage, "the faintest range")
        others |= {"R1": resistance, "C1": capacitor.exact}
        series = request.preferred.resistors.series
        fitted = {
            "R1": Fitted("R1", resistance, series, high=resistance, fixed="R1" in request.fixed),
            "C1": capacitor,
        }
        for branch in found:
            pair = _branch(request, derivation, bench, branch, others)
            others |= {part.ref: part.exact for part in pair}
            fitted |= {part.ref: part for part in pair}
    return (*fitted.values(), *surroundings(request, derivation, level))


def _without(others: Mapping[str, float], *names: str) -> dict[str, float]:
    return {name: value for name, value in others.items() if name not in names}


def _stage(
    request: SwitchedRequest, derivation: Derivation, bench: Bench, place: int, others: Mapping[str, float]
) -> Stage:
    """The stage in one range: its light, its contacts."""
    light = request.gain_ranges[place].power
    signal = request.signal.model_copy(update={"power": Spread(min=0.0, typ=light, max=light)})
    limits = {**bench.limits, "signal.power": Limit(light, 0.0, light)}
    used = {branch.closed: float(branch.place == place) for branch in branches(request)}
    bench = replace(bench, limits=limits)
    asked = request.model_copy(update={"signal": signal})
    open_ones = tuple(f"{branch.switch}.off_capacitance" for branch in branches(request) if branch.place != place)
    capacitance, parts = summing_capacitance(request, bench), {**others, **used}
    return Stage(asked, derivation, bench, capacitance, parts, decides=open_ones)


def _branch(
    request: SwitchedRequest, derivation: Derivation, bench: Bench, branch: Branch, others: Mapping[str, float]
) -> tuple[Fitted, Fitted]:
    """Resistor and capacitor that, beside R1 and C1, make the feedback of one range."""
    first, beside = others["R1"], others["C1"]
    contact = bench.nominal(f"{branch.switch}.on_resistance")
    fixed = request.fixed

    def resistors(total: float | Lanes) -> Values:
        return {"R1": first, branch.resistor: 1 / (1 / total - 1 / first) - contact}

    def capacitors(total: float | Lanes) -> Values:
        return {"C1": beside, branch.capacitor: total - beside}

    own = _without(others, "R1", "C1", branch.resistor, branch.capacitor)
    stage = _stage(request, Derivation(), bench, branch.place, own)
    asked = {}
    if branch.resistor in fixed:
        asked["R1"] = 1 / (1 / first + 1 / (fixed[branch.resistor] + contact))
    if branch.capacitor in fixed:
        asked["C1"] = fixed[branch.capacitor] + beside
    stage = replace(
        stage,
        request=stage.request.model_copy(update={"fixed": asked, "require": _without_noise(request)}),
        resistors=resistors,
        capacitors=capacitors,
    )
    light = write(request.gain_ranges[branch.place].power, "W")
    pair = _sized(stage, f"the range up to {light}")
    if pair.resistance >= first:
        raise InfeasibleError(
            f"the range up to {light} allows {write(pair.resistance, 'Ω')}, no less than the {write(first, 'Ω')} of the"
            " faintest range: it buys nothing",
            ["gain_ranges farther apart", "fewer gain_ranges"],
        )
    resistance = derivation.compute(
        branch.resistor, feedback_network.branch_resistance,
        reason=f"{write(pair.resistance, 'Ω')} in all up to {light}; {stage.derivation.reasons.get('R1', '')}",
        total=pair.resistance, first=first, contact=contact,
    )  # fmt: skip
    step = stage.derivation.of("C1")
    derivation.note(branch.capacitor, f"beside C1, up to {light}: {step.reason if step else 'fixed'}")
    like = pair.capacitor
    low, high = (max(edge - beside, 0.0) for edge in (like.low, like.high))
    exact = max(like.exact - beside, 0.0)
    bare = exact < stage.smallest
    return (
        Fitted(branch.resistor, resistance, request.preferred.resistors.series, high=resistance,
               fixed=branch.resistor in fixed),
        Fitted(branch.capacitor, exact, like.series, low=0.0 if bare else min(low, exact / 2), high=high,
               omittable=bare, fixed=branch.capacitor in fixed),
    )  # fmt: skip


def _without_noise(request: SwitchedRequest) -> dict[str, Bounds]:
    """What is required of the brighter ranges too."""
    return {name: bounds for name, bounds in request.require.items() if name not in NOISE}


def _sized(stage: Stage, which: str) -> Pair:
    try:
        return feedback_pair(stage)
    except InfeasibleError as error:
        raise InfeasibleError(f"in {which}: {error.reason}", list(error.remedies)) from error


FORMULAS = (
    feedback_network.branch_resistance,
    transimpedance.feedback_resistance,
    transimpedance_limits.largest_feedback_resistance,
    transimpedance.feedback_capacitance,
    transimpedance.natural_frequency,
    transimpedance.quality_factor,
    second_order.bandwidth,
    loop.noise_gain,
    front_end.output_offset,
)
