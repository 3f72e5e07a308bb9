"""What biases follower and detector: R4, R5 and C4."""

from __future__ import annotations

from math import inf, pi

from opto_ckt.circuit import Bench
from opto_ckt.circuits.receivers.detector import brightest, on_the_bench, one_level, wanted_bandwidth
from opto_ckt.circuits.receivers.tia_bootstrap import follower
from opto_ckt.derivation import Derivation
from opto_ckt.errors import InfeasibleError
from opto_ckt.formulas import junction_fet, reference
from opto_ckt.request import BootstrapRequest
from opto_ckt.units import percent, write

FASTER = 3.0  #: pole of the follower over the bandwidth wanted, common practice: it then costs a twentieth of it
BARELY = 1.1  #: the same below which no stage reaches the bandwidth; ours
LEAST_SHARE, MOST_SHARE = 0.25, 0.8  #: of the least I_DSS as the current of J1, common practice
CLASS_A = 4.0  #: current of J1 over the largest photocurrent that it has to take, common practice
BIAS_DROP = 0.1  #: of the reverse bias that R5 may take at the most light, common practice
LEAST_DROP = 0.05  #: where there is hardly any bias [V]
LARGEST_FEED = 100e3  #: where next to no light flows, common practice [Ω]
BELOW = 100.0  #: how far the bootstrap begins below where the capacitance begins to matter; ours
TAIL = 1 / 2000  #: share of a step that may creep in as slowly as the far end settles through R5 and C4; ours


def feeding(request: BootstrapRequest, derivation: Derivation, bench: Bench) -> float:
    """R5: as large as the drop of the steady light allows, so that it hardly loads the follower. [Ω]

    What light moves the far end by, at rest, drives the shunt of the detector too: R5 stays far below that.
    """
    fixed = request.fixed.get("R5")
    if fixed is not None:
        derivation.note("R5", "fixed in the design file")
        return fixed
    most = brightest(request, bench)
    light = most["D1.responsivity"] * most["signal.power"]
    current = light + most["D1.ambient_current"] + most["D1.dark_current"]
    drop = max(BIAS_DROP * request.detector.resting_bias, LEAST_DROP)
    hot = on_the_bench(request, bench, bench.high("temperature"))
    shunt = hot["D1.shunt_resistance"] * bench.low("D1.shunt_resistance") / bench.nominal("D1.shunt_resistance")
    ways = {
        f"{write(drop, 'V')} at the most light, {write(current, 'A')} on average: {percent(BIAS_DROP)} of the bias": (
            drop / current if current else inf
        ),
        f"R5/R_sh ≤ {percent(TAIL)}, so much of a step creeps in: D1's shunt comes down to {write(shunt, 'Ω')}": (
            TAIL * shunt
        ),
        "no more, for the noise of what leaks": LARGEST_FEED,
    }
    reason = min(ways, key=lambda way: ways[way])
    derivation.note("R5", f"{reason}; common practice")
    return ways[reason]


def rest_current(request: BootstrapRequest, derivation: Derivation, bench: Bench, feed: float) -> float:
    """R4: the current that makes the weakest J1 fast enough, and never more than the least J1 takes. [Ω]

    Raises
    ------
    InfeasibleError : no current makes J1 faster than the signal, or none is large beside the photocurrent.
    """
    fixed = request.fixed.get("R4")
    if fixed is not None:
        derivation.note("R4", "fixed in the design file")
        return fixed
    least, wide = bench.low("J1.saturation_current"), bench.high("J1.pinch_off_voltage")
    ceiling = MOST_SHARE * least
    current, reason = LEAST_SHARE * least, f"{percent(LEAST_SHARE)} of the least I_DSS"
    needed = _fast_current(request, derivation, bench, feed, FASTER)
    if needed > current:
        current, reason = needed, f"pole of J1 at {FASTER:g} times the bandwidth"
    if current > ceiling:
        current, reason = ceiling, f"{percent(MOST_SHARE)} of the least I_DSS; more would make the gate conduct"
        barely = _fast_current(request, derivation, bench, feed, BARELY)
        if barely > ceiling:
            raise _too_slow(request, bench, feed, least, wide)
    light = CLASS_A * float(one_level(brightest(request, bench), request))
    if light > current:
        if light > ceiling:
            raise InfeasibleError(
                f"J1 carries at most {write(ceiling, 'A')}, {percent(MOST_SHARE)} of its least I_DSS; the largest"
                f" photocurrent asks for {CLASS_A:g} times itself, {write(light, 'A')}",
                [
                    f"saturation_current of J1 ≥ {write(light / MOST_SHARE, 'A')}",
                    f"signal.power.max ≤ {write(request.signal.power.high * ceiling / light, 'W')}",
                ],
            )
        current, reason = light, f"{CLASS_A:g} times the largest photocurrent"
    return derivation.compute(
        "R4",
        junction_fet.source_resistance,
        reason=f"{write(current, 'A')} at least, with the weakest J1 and the lowest supply: {reason}",
        saturation_current=least,
        pinch_off_voltage=bench.low("J1.pinch_off_voltage"),
        current=current,
        pull=_least_pull(request, bench),
    )


def _least_pull(request: BootstrapRequest, bench: Bench) -> float:
    """From the level to the rail that R4 goes to, at the low end of the supply. [V]

    Raises
    ------
    InfeasibleError : there is no rail beyond the level.
    """
    level = request.conditions.input_level
    ends = {"supply.negative": bench.high("supply.negative"), "supply.positive": bench.low("supply.positive")}
    pull = float(follower.pull(ends, request, level))
    if pull <= 0:
        raise InfeasibleError(
            "R4 has no voltage: the level of the + input is that of the rail it goes to",
            ["conditions.supply.negative below 0 V", "conditions.input_level above 0 V"],
        )
    return pull


def _fast_current(request: BootstrapRequest, derivation: Derivation, bench: Bench, feed: float, times: float) -> float:
    """Drain current that puts the pole of the weakest J1 so many times above the bandwidth wanted. [A]"""
    bandwidth = wanted_bandwidth(request)
    if bandwidth is None:
        return 0.0
    needed = derivation.compute(
        "least transconductance of J1",
        junction_fet.least_transconductance,
        reason=f"pole in the way of the photocurrent at {times:g} × {write(bandwidth, 'Hz')}, most capacitance",
        bandwidth=times * bandwidth,
        load_resistance=feed,
        **_most_capacitance(request, bench),
    )
    least, wide = bench.low("J1.saturation_current"), bench.high("J1.pinch_off_voltage")
    return (max(needed, 0.0) * wide / 2) ** 2 / least


def _most_capacitance(request: BootstrapRequest, bench: Bench) -> dict[str, float]:
    bias = request.detector.resting_bias
    return {
        "diode": float(request.detector.capacitance_at(bias, bench.high("D1.capacitance"))),
        "gate_source": bench.high("J1.gate_source_capacitance"),
    }


def _too_slow(request: BootstrapRequest, bench: Bench, feed: float, least: float, wide: float) -> InfeasibleError:
    capacitance = _most_capacitance(request, bench)
    steep = float(
        junction_fet.transconductance(saturation_current=least, pinch_off_voltage=wide, current=MOST_SHARE * least)
    )
    pole = float(junction_fet.bootstrap_bandwidth(transconductance=steep, load_resistance=feed, **capacitance))
    bandwidth = wanted_bandwidth(request) or 0.0
    wanted = float(
        junction_fet.least_transconductance(bandwidth=BARELY * bandwidth, load_resistance=feed, **capacitance)
    )
    together = (steep + 1 / feed) / (2 * pi * BARELY * bandwidth)
    left = together - capacitance["gate_source"]
    remedies = [f"transconductance of J1 ≥ {write(wanted, 'A/V')}, at {percent(MOST_SHARE)} of its least I_DSS"]
    if left > 0:
        remedies.append(f"most capacitance of D1 ≤ {write(left, 'F')}")
    remedies.append(f"bandwidth ≤ {write(pole / BARELY, 'Hz')}")
    return InfeasibleError(
        f"the bootstrap is slower than the signal: the weakest J1 has {write(steep, 'A/V')} at the most, its pole"
        f" g_m/(2π (C_d + C_gs)) lies at {write(pole, 'Hz')} with the most capacitance, the bandwidth wanted is"
        f" {write(bandwidth, 'Hz')}",
        remedies,
    )


def coupling(request: BootstrapRequest, derivation: Derivation, bench: Bench, feedback: float, feed: float) -> float:
    """C4: the bootstrap begins far below where the capacitance matters, and hardly any of a step creeps. [F]

    Standing photocurrent moves the far end by its drop in R5, with the time constant of R5 and C4; C_d passes that on
    as a current of C_d/C4 of the photocurrent.
    """
    fixed = request.fixed.get("C4")
    if fixed is not None:
        derivation.note("C4", "fixed in the design file")
        return fixed
    whole = _most_capacitance(request, bench)["diode"]
    corner = 1 / (2 * pi * feedback * whole) / BELOW
    found = derivation.compute(
        "C4",
        reference.filter_capacitance,
        reason=f"bootstrap from {write(corner, 'Hz')} on, a {BELOW:.0f}th of 1/(2π R1 C_d), with R5",
        resistance=feed,
        corner=corner,
    )
    least = whole / TAIL
    if least > found:
        said = f"C_d/C4 ≤ {percent(TAIL)}: so much of a step creeps in with R5 C4; D1 has {write(whole, 'F')} at most"
        derivation.note("C4", said)
    return max(found, least)
