"""The gain of an avalanche detector: the best one by trial, what bias and temperature make of it, what forbids it."""

from __future__ import annotations

from collections.abc import Callable
from math import inf, isfinite, log

import numpy as np

from opto_ckt.circuit import Refusal
from opto_ckt.circuits.receivers.detector import bias_reach, level_factor
from opto_ckt.errors import InfeasibleError
from opto_ckt.limits import Figures
from opto_ckt.parts.avalanche import bias_for_gain, breakdown, gain_at, gain_follows
from opto_ckt.request import ReceiverRequest
from opto_ckt.units import write

LEAST_GAIN = 1.2  #: from which the best gain is looked for
SCANNED = 8  #: gains from the least to the most, evenly in their logarithm
TRIALS = 6  #: of golden section: the gain is found to some per cent, the sensitivity to 0.05 dB
CLOSER = 20  #: steps towards the bias whose upper end is just what is allowed
GOLDEN = (5**0.5 - 1) / 2
DANGEROUS = 60.0  #: direct voltage from which a board needs care against touch, as extra-low voltage is bounded [V]


def settled(request: ReceiverRequest, figures: Callable[[ReceiverRequest], Figures]) -> ReceiverRequest:
    """The request with the gain that needs the least light, each trial sized; as it is where a gain is given.

    No gain is tried at which the most light makes more current than the detector stands.
    For a data signal the sensitivity decides, for an analog one the noise over the signal at its typical power.
    """
    if request.detector.wanted_gain != "optimum":
        return request

    def with_gain(logarithm: float) -> ReceiverRequest:
        detector = request.detector.model_copy(update={"wanted_gain": float(np.exp(logarithm))})
        return request.model_copy(update={"detector": detector})

    def cost(logarithm: float) -> float:
        try:
            found = figures(with_gain(logarithm))
        except InfeasibleError:
            return inf
        analog = found["output_noise"] / (found["transimpedance"] * np.exp(logarithm))
        value = float((found["sensitivity"] if request.signal.bit_rate is not None else analog)[0])
        return value if isfinite(value) else inf

    low, high = log(LEAST_GAIN), log(max(_most_gain(request), LEAST_GAIN))
    if overlit(with_gain(high)) is not None:
        dim = low
        for _ in range(CLOSER):
            middle = (dim + high) / 2
            dim, high = (middle, high) if overlit(with_gain(middle)) is None else (dim, middle)
        high = dim
    return with_gain(_least(cost, low, high))


def _least(cost: Callable[[float], float], low: float, high: float) -> float:
    """Where a function is least: the best of a scan with both ends in it, then golden section between its neighbours.

    The function has steps, where the sizing of a trial takes another way; so the best that was seen is what counts.
    """
    scanned: list[float] = np.linspace(low, high, SCANNED).tolist()
    seen = {at: cost(at) for at in scanned}
    best = min(range(SCANNED), key=lambda index: seen[scanned[index]])
    low, high = scanned[max(best - 1, 0)], scanned[min(best + 1, SCANNED - 1)]
    left, right = high - GOLDEN * (high - low), low + GOLDEN * (high - low)
    for _ in range(TRIALS):
        seen |= {at: cost(at) for at in (left, right) if at not in seen}
        if seen[left] <= seen[right]:
            high, right = right, left
            left = high - GOLDEN * (high - low)
        else:
            low, left = left, right
            right = low + GOLDEN * (high - low)
    return min(seen, key=lambda at: seen[at])


def _most_gain(request: ReceiverRequest) -> float:
    """Largest gain whose bias, at the upper end of its tolerance, stays below breakdown in the cold and the limit."""
    return float(gain_at(request.detector, _most_bias(request), request.detector.gain_temperature))


def _most_bias(request: ReceiverRequest) -> float:
    """Nominal bias that at the upper end of its tolerance stays just below breakdown in the cold and the limit. [V]"""
    coldest = request.conditions.temperature.low
    end = min(request.detector.reverse_voltage_max, 0.999 * breakdown(request.detector, coldest))
    bias = end
    for _ in range(CLOSER):
        bias *= end / bias_reach(request, 1, bias)
    return bias


def refused(request: ReceiverRequest) -> tuple[Refusal, ...]:
    """A bias that passes breakdown, or the diode's limit, at the cold end or the end of its tolerance."""
    detector = request.detector
    if not gain_follows(detector) or detector.wanted_gain == "optimum":
        return ()
    coldest, most = request.conditions.temperature.low, bias_reach(request, 1)
    end = breakdown(detector, coldest)
    if most < min(end, detector.reverse_voltage_max):
        return ()
    key, it = "reverse_bias", write(detector.resting_bias, "V")
    allowed = f"a bias of at most {write(_most_bias(request), 'V')}"
    if detector.wanted_gain is not None:
        key, it, allowed = "gain", "the bias for it", f"a gain of at most {_most_gain(request):.3g}"
    return (
        Refusal(
            ("detector", key),
            f"{it} may reach {write(most, 'V')}; breakdown at {write(coldest, '°C')} is {write(end, 'V')},"
            f" reverse_voltage_max {write(detector.reverse_voltage_max, 'V')}; {allowed}, or a closer bias tolerance",
        ),
    )


def overlit(request: ReceiverRequest) -> Refusal | None:
    """Light that makes more current than the detector stands, at its largest gain; None if it does not."""
    detector, most = request.detector, request.detector.photocurrent_max
    gain, where = _largest_gain(request)
    responsivity = detector.responsivity_spread(request.signal.wavelength).high / detector.responsivity_gain * gain
    light = responsivity * request.signal.power.high * level_factor(request)
    ambient = request.ambient_current.high * gain
    if most is None or not isfinite(gain) or light + ambient <= most:
        return None
    allowed = f"at most {write(max(most - ambient, 0.0) / light * request.signal.power.high, 'W')}" if light else ""
    if ambient >= most:
        allowed = f"the background alone makes {write(ambient, 'A')}"
    return Refusal(
        ("signal", "power"),
        f"a one with the background makes up to {write(light + ambient, 'A')} in the detector{where},"
        f" photocurrent_max is {write(most, 'A')}; {allowed}",
    )


def _largest_gain(request: ReceiverRequest) -> tuple[float, str]:
    """Largest gain at full bias, and where; that at nominal where a resistance takes of the bias as light grows."""
    detector, coldest = request.detector, request.conditions.temperature.low
    if not gain_follows(detector) or detector.wanted_gain == "optimum":
        return 1.0, ""
    if request.inverting and "bias_filter" not in request.blocks_asked:
        gain = float(gain_at(detector, bias_reach(request, 1), coldest))
        return gain, f" at {write(coldest, '°C')}, at a gain of {gain:.3g}"
    gain = float(gain_at(detector, detector.resting_bias, detector.gain_temperature))
    return gain, f" at a gain of {gain:.3g}"


def remarks(request: ReceiverRequest) -> list[str]:
    """Gain and bias over temperature, what stands for a shunt, and the caution that a voltage asks for."""
    detector = request.detector
    found = []
    if gain_follows(detector) and detector.resting_bias:
        bias, ends = detector.resting_bias, request.conditions.temperature
        gain = float(gain_at(detector, bias, detector.gain_temperature))
        cold, hot = (float(gain_at(detector, bias, end)) for end in (ends.low, ends.high))
        low, high = (write(bias_for_gain(detector, gain, end), "V") for end in (ends.low, ends.high))
        span = f"{write(ends.low, '°C')} … {write(ends.high, '°C')}"
        found.append(
            f"avalanche gain {gain:.3g} at {write(bias, 'V')}; over {span} that bias gives {cold:.3g} … {hot:.3g},"
            f" the same gain takes {low} … {high}"
        )
    if not detector.resting_bias and detector.shunt_resistance is None:
        found.append(
            "the sheet of D1 states no shunt_resistance: without bias it is taken as kT/(q I_d), dark current as its"
            " saturation current; measured ones are often higher"
        )
    if detector.resting_bias > DANGEROUS:
        found.append(
            f"{write(detector.resting_bias, 'V')} on the board: keep it from touch, discharge its capacitors through a"
            " bleed before work; local codes and a competent person decide"
        )
    return found
