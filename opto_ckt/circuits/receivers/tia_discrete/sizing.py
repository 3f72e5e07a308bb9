"""Exact values of the pair: current for the least noise, feedback from the whole network at its corners."""

from __future__ import annotations

from collections.abc import Iterator
from itertools import product
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from opto_ckt.circuit import Bench, Fitted
from opto_ckt.circuits.receivers.board import surroundings
from opto_ckt.circuits.receivers.detector import POLARITY, brightest, one_level, stage_bandwidth
from opto_ckt.circuits.receivers.tia_discrete.operation import LEAST_MARGIN
from opto_ckt.constants import ROOM_TEMPERATURE
from opto_ckt.derivation import Derivation
from opto_ckt.errors import InfeasibleError
from opto_ckt.formulas import shunt_pair, transimpedance, transistor
from opto_ckt.formulas.load_resistor import load_for_swing
from opto_ckt.limits import Lanes, Values
from opto_ckt.request import DiscreteRequest
from opto_ckt.units import write

FOLLOWER = 2e-3  #: through Q2: enough for a few picofarads; common practice [A]
LEAST_CURRENT, MOST_CURRENT = 50e-6, 10e-3  #: through Q1; below, f_T falls; common practice [A]
RESISTANCES = np.geomspace(1e-2, 1.0, 36)  #: tried, as multiples of the transimpedance limit
CAPACITANCES = np.concatenate([[0.0], np.geomspace(0.02e-12, 3e-12, 22)])  #: tried across R1 [F]
ALLOWED_PEAKING = 1.25  #: where nothing is asked for [dB]
SLOW_WHERE_HIGH = (
    "Q1.collector_capacitance", "Q2.collector_capacitance", "CS", "CB", "D1.series_resistance", "temperature",
)  # fmt: skip
SLOW_WHERE_LOW = ("supply.positive", "Q2.transition_frequency", "D1.transit_frequency")
"""These together, and R1 high, make the slowest receiver; their other ends the one that rings most."""
APART = ("Q1.transition_frequency", "Q1.current_gain", "D1.capacitance")
LEVELS = ("temperature", "Q1.base_emitter_voltage", "Q2.base_emitter_voltage")


def input_capacitance(request: DiscreteRequest, bench: Bench) -> dict[str, float]:
    """Capacitance of the summing node without Q1's own, by where it comes from, nominal. [F]"""
    capacitance = bench.nominal("D1.capacitance")
    return {
        "D1 at its bias": float(request.detector.capacitance_at(request.detector.resting_bias, capacitance)),
        "board": bench.nominal("CB"),
    }


def propose(request: DiscreteRequest, derivation: Derivation, bench: Bench) -> tuple[Fitted, ...]:
    """Every fitted part with its exact value and window.

    Raises
    ------
    InfeasibleError : no feedback reaches the bandwidth without ringing.
    """
    series, fixed = request.preferred.resistors.series, request.fixed
    bandwidth = stage_bandwidth(request) or 1e6
    around = sum(input_capacitance(request, bench).values()) + 2 * bench.nominal("Q1.collector_capacitance")
    first, second = (bench.nominal(f"{ref}.base_emitter_voltage") for ref in ("Q1", "Q2"))
    wanted = derivation.compute(
        "current of Q1", shunt_pair.quietest_current, reason=f"{write(around, 'F')} at the input",
        capacitance=around, bandwidth=bandwidth, current_gain=bench.nominal("Q1.current_gain"),
        temperature=ROOM_TEMPERATURE,
    )  # fmt: skip
    current = min(max(wanted, LEAST_CURRENT), MOST_CURRENT)
    level = first + second + LIFT
    collector = fixed.get("R2") or derivation.compute(
        "R2", shunt_pair.collector_resistance,
        reason=f"{write(current, 'A')} through Q1, quietest at {write(wanted, 'A')}",
        supply=bench.nominal("supply.positive"), level=level,
        current=current + FOLLOWER / bench.nominal("Q2.current_gain"),
    )  # fmt: skip
    emitter = fixed.get("R3", (first + LIFT - bench.nominal("supply.negative")) / FOLLOWER)
    derivation.note("R3", f"{write(FOLLOWER, 'A')} through Q2, common practice")
    others = {"R2": collector, "R3": emitter}
    resistance, capacitance = _feedback(request, derivation, bench, others, current, around, bandwidth)
    bare = capacitance <= 0
    return (
        Fitted("R1", resistance, series, high=resistance, fixed="R1" in fixed),
        Fitted("R2", collector, series, low=collector / 1.2, high=collector * 1.2, fixed="R2" in fixed),
        Fitted("R3", emitter, series, low=emitter / 1.2, high=emitter * 1.2, fixed="R3" in fixed),
        Fitted(
            "C1",
            fixed.get("C1", capacitance),
            request.preferred.capacitors.series,
            low=0.0 if bare else capacitance / 2,
            high=max(3 * capacitance, 0.3e-12),
            omittable=True,
            fixed="C1" in fixed,
        ),
        *surroundings(request, derivation, {}),
    )


LIFT = 0.1  #: of the output over the base of Q1 at rest, by the base current through R1; taken at the start [V]


def _feedback(
    request: DiscreteRequest,
    derivation: Derivation,
    bench: Bench,
    others: Values,
    current: float,
    around: float,
    bandwidth: float,
) -> tuple[float, float]:
    """Largest R1 for which some C1 keeps bandwidth, peaking and phase margin at every corner, and the least such C1."""
    conductance = float(transistor.bipolar_transconductance(current=current, temperature=ROOM_TEMPERATURE))
    gain = conductance * others["R2"]
    load = bench.nominal("Q1.collector_capacitance") + bench.nominal("Q2.collector_capacitance")
    inner = conductance / (2 * np.pi * bench.nominal("Q1.transition_frequency"))
    limit = derivation.compute(
        "transimpedance limit", shunt_pair.largest_feedback,
        reason=f"gain {float(gain):.3g}, {write(float(around + inner), 'F')} at the input",
        gain=float(gain), pole=float(1 / (2 * np.pi * others["R2"] * load)),
        capacitance=around + inner, bandwidth=bandwidth,
    )  # fmt: skip
    swing = _swing_resistance(request, derivation, bench)
    bound = request.require.get("transimpedance")
    most = min(limit, swing, bound.max if bound is not None and bound.max else np.inf)
    if "R1" in request.fixed:
        most = request.fixed["R1"]
    tried = np.array([most]) if "R1" in request.fixed else most * RESISTANCES
    trial = _try(request, bench, others, tried, bandwidth)
    good = np.flatnonzero(trial.kept.any(axis=1))
    if not len(good):
        if "R1" in request.fixed:
            return most, request.fixed.get("C1", 0.0)
        raise _infeasible(trial, bandwidth)
    index = int(good[-1])
    capacitance = float(CAPACITANCES[int(np.argmax(trial.kept[index]))])
    wide, clear = (bool(each[min(index + 1, len(tried) - 1)].any()) for each in (trial.wide, trial.clear))
    binding = "most light" if not clear else "peaking" if wide else "bandwidth"
    derivation.note(
        "R1",
        f"{binding} binds at the worst corner; swing at nominal levels would allow {write(swing, 'Ω')}, the"
        f" transimpedance limit {write(limit, 'Ω')}",
    )
    derivation.note("C1", "the least across R1 that neither rings nor slows at any corner; strays do the rest")
    return float(tried[index]), capacitance


class Trial(NamedTuple):
    """What each pair of R1 (rows) and C1 (columns) keeps at all corners."""

    least: Lanes  #: bandwidth at the worst of them [Hz]
    wide: NDArray[np.bool_]
    clear: NDArray[np.bool_]  #: the most light does not reach a limit of the output
    still: NDArray[np.bool_]  #: neither peaking nor phase margin passes its bound

    @property
    def kept(self) -> NDArray[np.bool_]:
        """Pairs that keep every bound."""
        return np.asarray(self.wide & self.clear & self.still)


def _try(request: DiscreteRequest, bench: Bench, others: Values, resistances: Lanes, bandwidth: float) -> Trial:
    require = request.require
    peaking = require["peaking"].max if "peaking" in require else None
    margin = require["phase_margin"].min if "phase_margin" in require else None
    bright = require["overload"].min if "overload" in require else None
    first, second = np.meshgrid(resistances, CAPACITANCES, indexing="ij")
    least, most = np.full(first.shape, np.inf), np.full(first.shape, np.inf)
    still = np.ones(first.shape, dtype=bool)
    for corner, off in _corners(bench, request.preferred.resistors.tolerance):
        found = bench.evaluate({**others, **corner, "R1": (first * (1 + off)).ravel(), "C1": second.ravel()})
        least = np.minimum(least, np.nan_to_num(found["bandwidth"], nan=0.0).reshape(first.shape))
        most = np.minimum(most, found["overload"].reshape(first.shape))
        calm = found["peaking"] <= (ALLOWED_PEAKING if peaking is None else peaking)
        still &= (calm & (found["phase_margin"] >= max(margin or 0.0, LEAST_MARGIN))).reshape(first.shape)
    wide, clear = least >= bandwidth, most >= max(bright or 0.0, request.signal.power.high)
    return Trial(least, wide, clear, still)


def _infeasible(trial: Trial, bandwidth: float) -> InfeasibleError:
    if not trial.clear.any():
        return InfeasibleError(
            "the most light takes the output to its limit at a corner whatever R1",
            ["a higher supply", "less light or ambient", "the other end of the detector to Q1"],
        )
    reached = float(np.max(np.where(trial.clear & trial.still, trial.least, 0.0)))
    less = [f"bandwidth well below {write(reached, 'Hz')}"] if reached else ["more peaking allowed"]
    return InfeasibleError(
        f"no feedback reaches {write(bandwidth, 'Hz')} at every corner without ringing or overload",
        ["transistors of higher transition frequency", "a detector of less capacitance", *less],
    )


def _corners(bench: Bench, tolerance: float) -> Iterator[tuple[dict[str, float], float]]:
    """Corners of speed, then those of the levels; each with the share by which R1 is off."""
    dim = {"signal.power": bench.low("signal.power")}
    for one, other, off in ((bench.low, bench.high, -tolerance), (bench.high, bench.low, tolerance)):
        strays = {name: one(name) for name in SLOW_WHERE_HIGH if name in bench.limits}
        strays |= {name: other(name) for name in SLOW_WHERE_LOW if name in bench.limits}
        for apart in product(*((bench.low(name), bench.high(name)) for name in APART)):
            yield {**dim, **strays, **dict(zip(APART, apart, strict=True))}, off
    tight = {name: bench.low(name) for name in ("supply.positive", "Q2.current_gain")}
    tight["Q1.saturation_voltage"] = bench.high("Q1.saturation_voltage")
    for levels in product(*((bench.low(name), bench.high(name)) for name in LEVELS)):
        bright = {"D1.responsivity": bench.high("D1.responsivity"), **dict(zip(LEVELS, levels, strict=True))}
        yield {**tight, **bright}, tolerance


def _swing_resistance(request: DiscreteRequest, derivation: Derivation, bench: Bench) -> float:
    """R1 that keeps the one level of most light within a share of the headroom. [Ω]"""
    most = brightest(request, bench)
    current = float(one_level(most, request)) + most["D1.ambient_current"] + most["D1.dark_current"]
    first, second = bench.high("Q1.base_emitter_voltage"), bench.high("Q2.base_emitter_voltage")
    rising = POLARITY[request.detector.output] > 0
    room = bench.low("supply.positive") - first - second if rising else first - max(bench.high("supply.negative"), 0.0)
    required = request.require.get("output_swing")
    swing = room
    if required is not None and required.max:
        swing = min(swing, required.max)
    return derivation.compute(
        "R1 from swing", load_for_swing, reason=f"{write(swing, 'V')} / {write(current, 'A')}",
        swing=swing, current=current,
    )  # fmt: skip


FORMULAS = (
    shunt_pair.quietest_current,
    shunt_pair.collector_resistance,
    shunt_pair.largest_feedback,
    transistor.base_emitter_capacitance,
    transistor.bipolar_transconductance,
    transimpedance.feedback_resistance,
)
