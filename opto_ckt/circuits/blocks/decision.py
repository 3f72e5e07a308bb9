r"""Decision stage: a comparator with its threshold and hysteresis at the output of the receiver.

    out --[R60]--+--|+ \
                 |  | U60 >--+--- decided
                 +--[ R61 ]--+
    rail --[R62]-+--|- /               R62 only where DC passes
               [R63] [C60]
                level
"""

from __future__ import annotations

from dataclasses import dataclass
from math import isfinite

import numpy as np

from opto_ckt.circuit import Bench, Block, Fitted, Refusal, Stress
from opto_ckt.circuits.receivers.amplifier import either_sign
from opto_ckt.circuits.receivers.board import BYPASS, level_node, negative_node
from opto_ckt.circuits.receivers.detector import direction, midband
from opto_ckt.derivation import Derivation
from opto_ckt.formulas import comparator, decision
from opto_ckt.formulas.reference import filter_capacitance, upper_resistance
from opto_ckt.limits import Limit, Limits, Values
from opto_ckt.request import ReceiverRequest
from opto_ckt.topology import GROUND, RIGHT, Capacitor, Comparator, Element, Point, Resistor, Topology
from opto_ckt.units import write

SERIES = 1e3  #: R60: far above the receiver's output, far below the comparator's input; common practice [Ω]
LOWER = 1e3  #: R63 of the threshold; common practice [Ω]
NOISES = 4.0  #: hysteresis over the output noise, rms, where none is asked for; common practice
FIRST_STAGE = ("feedback_resistance", "U1.transimpedance", "load.transimpedance")  #: whichever a receiver has [V/A]
CORNER = 1e3  #: of the threshold's filter; common practice [Hz]


@dataclass(frozen=True)
class Levels:
    """What the comparator decides between, at the typical power."""

    one: float  #: [V]
    zero: float  #: [V]
    one_noise: float  #: rms [V]
    zero_noise: float  #: rms [V]


def passes_dc(request: ReceiverRequest) -> bool:
    """Whether the levels at the comparator move with the light."""
    return midband(request) is None


def topology(request: ReceiverRequest) -> Topology:
    """The comparator, its threshold, its bypass."""
    negative, level = negative_node(request), level_node(request)
    elements: list[Element] = [
        Resistor("R60", "in", "seen", role="decision", at=(1, -3.5), to=(1, -6.5)),
        Resistor("R61", "seen", "out", role="hysteresis", at=(2.2, -4.8), to=(5.2, -4.8)),
        Comparator("U60", plus="seen", minus="thresh", out="out", positive="positive", negative=negative,
                   role="decision", table="comparator", at=(2.5, -7), facing=RIGHT, flipped=True),
        Resistor("R63", "thresh", level, role="threshold", at=(1.5, -9), to=(1.5, -11)),
        Capacitor("C60", "thresh", level, role="threshold", stock="bypass", at=(3, -9), to=(3, -11)),
        Capacitor("C68", "positive", GROUND, role="bypass", stock="bypass", at=(8, -6.5), to=(8, -8.5)),
    ]  # fmt: skip
    wires: list[tuple[Point, Point]] = [
        ((0, 0), (1, 0)), ((1, 0), (1, -3.5)), ((1, -6.5), (2.5, -6.5)), ((2.2, -6.5), (2.2, -4.8)),
        ((5.2, -4.8), (5.2, -7)), ((4.5, -7), (6, -7)),
        ((2.5, -7.5), (1.5, -7.5)), ((1.5, -7.5), (1.5, -9)), ((1.5, -9), (3, -9)),
    ]  # fmt: skip
    marks: list[tuple[Point, str]] = [
        ((3.5, -6), "positive"), ((3.5, -8), negative), ((6, -7), "out"),
        ((1.5, -11), level), ((3, -11), level), ((8, -6.5), "positive"), ((8, -8.5), GROUND),
    ]  # fmt: skip
    if passes_dc(request):
        elements.append(Resistor("R62", _rail(request), "thresh", role="threshold", at=(-1, -9), to=(1.5, -9)))
        marks.append(((-1, -9), _rail(request)))
    if negative != GROUND:
        elements.append(
            Capacitor("C69", GROUND, "negative", role="bypass", stock="bypass", at=(10, -6.5), to=(10, -8.5))
        )
        marks += [((10, -6.5), GROUND), ((10, -8.5), "negative")]
    return Topology(tuple(elements), "", ("out", GROUND), wires=tuple(wires), marks=tuple(marks))


def _rail(request: ReceiverRequest) -> str:
    """The rail on the side to which light drives the output."""
    return "positive" if direction(request) > 0 else "negative"


def given(request: ReceiverRequest) -> dict[str, Limit]:
    """Offset of the comparator with either sign."""
    return {} if request.comparator is None else either_sign(request.comparator, "U60")


def propose(request: ReceiverRequest, derivation: Derivation, bench: Bench, exact: Values) -> tuple[Fitted, ...]:
    """Threshold from the levels and their noise, hysteresis above the noise."""
    levels = _levels(request, bench, exact)
    asked, fixed = request.blocks.decision, request.fixed
    resistors, stock = request.preferred.resistors.series, request.preferred.bypass
    span = bench.nominal("supply.positive") - bench.nominal("supply.negative")
    noise = max(levels.one_noise, levels.zero_noise)
    wanted = NOISES * noise if asked is None or asked.hysteresis is None else asked.hysteresis
    series = fixed.get("R60", SERIES)
    derivation.note("R60", f"{write(SERIES, 'Ω')}, common practice")
    feedback = derivation.compute(
        "R61", comparator.hysteresis_resistance,
        reason=f"{write(wanted, 'V')} of hysteresis, {write(noise, 'V')} rms of noise",
        series=series, swing=span, hysteresis=wanted,
    )  # fmt: skip
    lower = fixed.get("R63", LOWER)
    derivation.note("R63", f"{write(LOWER, 'Ω')}, common practice")
    found = [
        Fitted("R60", series, resistors, low=series / 1.05, high=series * 1.05, fixed="R60" in fixed),
        Fitted("R61", fixed.get("R61", feedback), resistors, fixed="R61" in fixed),
        Fitted("R63", lower, resistors, low=lower / 1.5, high=lower * 1.5, fixed="R63" in fixed),
    ]
    if passes_dc(request):
        threshold = derivation.compute(
            "threshold", comparator.best_threshold,
            reason="levels at the typical power, each with its noise",
            one=levels.one, zero=levels.zero, one_noise=levels.one_noise, zero_noise=levels.zero_noise,
        )  # fmt: skip
        rail = abs(bench.nominal(f"supply.{_rail(request)}"))
        upper = derivation.compute(
            "R62", upper_resistance, reason=f"{write(abs(threshold), 'V')} from {write(rail, 'V')}",
            voltage=rail, tap_voltage=min(max(abs(threshold), 1e-3), 0.95 * rail), lower=lower,
        )  # fmt: skip
        found.append(Fitted("R62", fixed.get("R62", upper), resistors, fixed="R62" in fixed))
    filtered = derivation.compute(
        "C60", filter_capacitance, reason=f"corner at {write(CORNER, 'Hz')}, common practice",
        resistance=lower, corner=CORNER,
    )  # fmt: skip
    found.append(Fitted("C60", fixed.get("C60", filtered), stock.series, low=filtered, fixed="C60" in fixed))
    for ref in ("C68", "C69") if request.conditions.supply.negative else ("C68",):
        derivation.note(ref, "common practice: 100 nF close to each supply pin")
        value = fixed.get(ref, BYPASS)
        found.append(Fitted(ref, value, stock.series, low=value, high=value, fixed=ref in fixed))
    return tuple(found)


def _levels(request: ReceiverRequest, bench: Bench, exact: Values) -> Levels:
    """Levels at the comparator with all else nominal, and their noise."""
    parts = {"R60": SERIES, "R61": 1e9, "R62": 1e9, "R63": LOWER, "C60": 1e-7, "C68": BYPASS, "C69": BYPASS}
    values = {name: np.array([value]) for name, value in {**exact, **parts}.items()}
    figures = bench.evaluate({**values, "signal.ambient": np.array([bench.nominal("signal.ambient")])})
    signal = request.signal
    responsivity = float(figures["input_noise_density"][0] / figures["nep_density"][0])
    gain, rms = float(figures["transimpedance"][0]) * responsivity, float(figures["output_noise"][0])
    average, ratio = signal.power.nominal, signal.extinction_ratio
    standing = 0.0 if midband(request) else responsivity_of_ambient(bench, gain, responsivity)
    swing = float(decision.modulation_amplitude(average_power=average, extinction_ratio=ratio)) * gain
    middle = (average * gain if passes_dc(request) else 0.0) + standing
    sign = direction(request)
    return Levels(sign * (middle + swing / 2), sign * (middle - swing / 2), rms, rms)


def responsivity_of_ambient(bench: Bench, gain: float, responsivity: float) -> float:
    """Level that the nominal background makes. [V]"""
    return bench.nominal("signal.ambient") * gain / responsivity


def stresses(values: Values, request: ReceiverRequest) -> tuple[Stress, ...]:
    """The supplies across whatever lies between them."""
    positive, negative = values["supply.positive"], np.abs(values["supply.negative"])
    span = positive + negative
    found = [Stress("R61", voltage=span, power=span**2 / values["R61"]), Stress("R60", voltage=span)]
    found += [Stress(ref, voltage=span, power=positive**2 / values[ref]) for ref in ("R62", "R63") if ref in values]
    across = {"U60": span, "C60": positive, "C68": positive, "C69": negative}
    return (*found, *(Stress(ref, voltage=volts) for ref, volts in across.items()))


def remarks(values: Values, limits: Limits, request: ReceiverRequest) -> tuple[str, ...]:
    """What offset and hysteresis cost at the typical power."""
    span = float(np.median(values["supply.positive"] - values["supply.negative"]))
    series, feedback = float(np.median(values["R60"])), float(np.median(values["R61"]))
    width = span * series / (series + feedback)
    offset = 0.0 if request.comparator is None else request.comparator.offset_voltage.high
    first = next((values[name] for name in FIRST_STAGE if name in values), 0.0)
    gain = float(np.median(first * values.get("second.gain", 1.0)))
    distance = 0.5 * gain * float(
        decision.modulation_amplitude(
            average_power=request.signal.power.nominal, extinction_ratio=request.signal.extinction_ratio
        )
    ) * float(np.median(values["D1.responsivity"]))  # fmt: skip
    error = offset + width / 2
    told = f"decision: {write(width, 'V')} of hysteresis and {write(offset, 'V')} of offset"
    if not error < distance:
        return (f"{told} leave nothing of {write(distance, 'V')} from level to threshold at the typical power",)
    penalty = float(comparator.threshold_penalty(error=error, distance=distance))
    return (f"{told} cost {write(penalty, 'dB')} of light at the typical power",) if isfinite(penalty) else ()


def refused(request: ReceiverRequest) -> tuple[Refusal, ...]:
    """An analog signal; no comparator."""
    where = ("blocks", "decision")
    if request.signal.bit_rate is None:
        return (Refusal(where, "decides bits; this signal has a band"),)
    if request.comparator is None:
        return (Refusal(where, "needs a table [comparator], with the figures of an op amp record"),)
    if passes_dc(request) and _rail(request) == "negative" and not request.conditions.supply.negative:
        return (Refusal(where, "the output falls with light and has no rail below it: fit ac_coupling or servo"),)
    return ()


BLOCK = Block(
    name="decision",
    topology=topology,
    propose=propose,
    given=given,
    stresses=stresses,
    remarks=remarks,
    refused=refused,
    formulas=(
        comparator.best_threshold,
        comparator.hysteresis_resistance,
        comparator.threshold_penalty,
        upper_resistance,
    ),
)
