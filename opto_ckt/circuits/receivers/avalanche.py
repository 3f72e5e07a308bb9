"""The gain of an avalanche detector: the best one by trial, what bias and temperature make of it, what forbids it."""

from __future__ import annotations

from collections.abc import Callable
from math import inf, isfinite, log

import numpy as np

from opto_ckt.circuit import Refusal
from opto_ckt.circuits.receivers.detector import bias_reach
from opto_ckt.errors import InfeasibleError
from opto_ckt.limits import Figures
from opto_ckt.parts.avalanche import bias_for_gain, breakdown, gain_at, gain_follows
from opto_ckt.request import ReceiverRequest
from opto_ckt.units import write

LEAST_GAIN = 1.2  #: from which the best gain is looked for
TRIALS = 12  #: of a golden section search: the gain is found to a few per cent, the sensitivity far closer
CLOSER = 20  #: steps towards the bias whose upper end is just what is allowed
GOLDEN = (5**0.5 - 1) / 2
DANGEROUS = 60.0  #: direct voltage from which a board needs care against touch, as extra-low voltage is bounded [V]


def settled(request: ReceiverRequest, figures: Callable[[ReceiverRequest], Figures]) -> ReceiverRequest:
    """The request with the gain that needs the least light, each trial sized; as it is where a gain is given.

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

    return with_gain(_least(cost, log(LEAST_GAIN), log(max(_most_gain(request), LEAST_GAIN))))


def _least(cost: Callable[[float], float], low: float, high: float) -> float:
    """Where a function of one minimum is least, by golden section."""
    inner = [high - GOLDEN * (high - low), low + GOLDEN * (high - low)]
    costs = [cost(at) for at in inner]
    for _ in range(TRIALS - 2):
        if costs[0] <= costs[1]:
            high, inner[1], costs[1] = inner[1], inner[0], costs[0]
            inner[0] = high - GOLDEN * (high - low)
            costs[0] = cost(inner[0])
        else:
            low, inner[0], costs[0] = inner[0], inner[1], costs[1]
            inner[1] = low + GOLDEN * (high - low)
            costs[1] = cost(inner[1])
    return inner[0] if costs[0] <= costs[1] else inner[1]


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
