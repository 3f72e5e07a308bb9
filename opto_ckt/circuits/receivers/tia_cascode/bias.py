"""What biases the transistor: R4 from its emitter, R5 to its collector."""

from __future__ import annotations

from opto_ckt.circuit import Bench
from opto_ckt.circuits.receivers import bipolar
from opto_ckt.circuits.receivers.detector import POLARITY, stage_bandwidth
from opto_ckt.circuits.receivers.tia_cascode import transistor
from opto_ckt.constants import ROOM_TEMPERATURE
from opto_ckt.derivation import Derivation
from opto_ckt.errors import InfeasibleError
from opto_ckt.formulas import common_base, front_end
from opto_ckt.request import CascodeRequest
from opto_ckt.units import write

FASTER = 2.0  #: pole at the emitter over the bandwidth wanted, at its worst corner: it takes a seventh of it; ours
SLOWEST = 3.0  #: transition frequency over that pole, common practice: below, the charge of the base rules
LEAST_CURRENT = 10e-6  #: below it current gain and speed of a transistor fall off; common practice [A]


def bias_parts(request: CascodeRequest, derivation: Derivation, bench: Bench) -> dict[str, float]:
    """R4 and R5, as sized or as fixed. [Ω]

    Raises
    ------
    InfeasibleError : the transistor is too slow, or a rail is too near to its base.
    """
    for ref in request.fixed.keys() & {"R4", "R5"}:
        derivation.note(ref, "fixed in the design file")
    current, reason = rest_current(request, derivation, bench)
    drift = bipolar.DRIFT * (bench.low("temperature") - ROOM_TEMPERATURE)
    across, cold = _least_pull(request, bench), bench.high("Q1.base_emitter_voltage") + drift
    if across <= cold:
        raise InfeasibleError(
            f"R4 has no voltage: {write(across, 'V')} from the base to its rail, the base-emitter voltage takes"
            f" {write(cold, 'V')} in the cold",
            [_other_rail(request, cold - across)],
        )
    r4 = request.fixed.get("R4") or derivation.compute(
        "R4", common_base.emitter_resistance,
        reason=f"{write(current, 'A')} at the lowest supply, in the cold: {reason}",
        pull=across, base_emitter_voltage=cold, current=current,
    )  # fmt: skip
    sign, supply, level = POLARITY[request.detector.output], request.conditions.supply, request.conditions.input_level
    usual = float(transistor.stated_current(request, r4))
    rail = supply.positive if sign > 0 else supply.negative
    r5 = request.fixed.get("R5") or derivation.compute(
        "R5", common_base.return_resistance,
        reason=f"balances {write(usual, 'A')} of the emitter at nominal, no light",
        voltage=sign * (rail - level), current_gain=bench.nominal("Q1.current_gain"), current=usual,
    )  # fmt: skip
    return {"R4": r4, "R5": r5}


def rest_current(request: CascodeRequest, derivation: Derivation, bench: Bench) -> tuple[float, str]:
    """Current of the emitter without light, and why. [A]

    Raises
    ------
    InfeasibleError : the transition frequency of the transistor is too low for the pole.
    """
    wanted = stage_bandwidth(request)
    if wanted is None:
        return LEAST_CURRENT, "no bandwidth is asked for; common practice"
    frequency, slow, hot = FASTER * wanted, bench.low("Q1.transition_frequency"), bench.high("temperature")
    if slow < SLOWEST * frequency:
        raise InfeasibleError(
            f"Q1 is slower than the signal: its transition frequency comes down to {write(slow, 'Hz')}; {SLOWEST:g}"
            f" times the pole at the emitter, {write(frequency, 'Hz')}, is asked of it",
            [
                f"transition frequency of Q1 ≥ {write(SLOWEST * frequency, 'Hz')}",
                f"bandwidth ≤ {write(slow / SLOWEST / FASTER, 'Hz')}",
            ],
        )
    bias = max(request.detector.resting_bias - bench.high("Q1.base_emitter_voltage"), 0.0)
    detector = float(request.detector.capacitance_at(bias, bench.high("D1.capacitance")))
    capacitance = derivation.compute(
        "capacitance at the emitter", common_base.emitter_capacitance,
        reason="most capacitance of D1 and board, slowest Q1",
        capacitance=detector + bench.high("CE"), bandwidth=frequency, transition_frequency=slow,
    )  # fmt: skip
    current = derivation.compute(
        "current of the emitter", front_end.cascode_current,
        reason=f"pole at {FASTER:g} × {write(wanted, 'Hz')}, {write(hot, '°C')}",
        capacitance=capacitance, bandwidth=frequency, temperature=hot,
    )  # fmt: skip
    most = request.transistor.current_max
    if current > most:
        raise InfeasibleError(
            f"the pole at the emitter asks for {write(current, 'A')}, Q1 stands {write(most, 'A')}",
            [f"bandwidth ≤ {write(wanted * most / current, 'Hz')}", "a detector of less capacitance"],
        )
    return current, f"pole at the emitter {FASTER:g} times the bandwidth, most capacitance, hot"


def _least_pull(request: CascodeRequest, bench: Bench) -> float:
    """From the base to the rail of R4 at the low end of the supplies; a level follows the positive one. [V]"""
    low = bench.low("supply.positive")
    level = request.conditions.input_level * low / bench.nominal("supply.positive")
    rails = {"supply.positive": low, "supply.negative": bench.high("supply.negative")}
    return float(transistor.pull(rails, request, level))


def _other_rail(request: CascodeRequest, more: float) -> str:
    way = "lower" if POLARITY[request.detector.output] < 0 else "higher"
    if request.conditions.input_level > 0:
        return f"conditions.input_level {way} by {write(more, 'V')} and more"
    return f"conditions.supply wider by {write(more, 'V')} and more, or conditions.input_level {way}"
