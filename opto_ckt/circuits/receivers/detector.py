"""The light on the detector and what the detector makes of it, for every receiver."""

from __future__ import annotations

from itertools import product

import numpy as np

from opto_ckt.circuit import Bench
from opto_ckt.constants import BOLTZMANN, ELEMENTARY_CHARGE, ROOM_TEMPERATURE
from opto_ckt.formulas.leakage import dark_current, unbiased_shunt
from opto_ckt.formulas.transit import bandwidth_of_rise_time
from opto_ckt.limits import Lanes, Limit, Values
from opto_ckt.parts.avalanche import excess_noise, gain_at, gain_follows, is_avalanche
from opto_ckt.parts.photodiode import PhotodiodeData
from opto_ckt.parts.record import Spread, facts
from opto_ckt.request import ReceiverRequest
from opto_ckt.request.detector import Detector

POLARITY = {"cathode": 1.0, "anode": -1.0}
"""Sign of the output step that light makes, by the end of the diode that feeds an inverting amplifier."""

LEAST_DARK = 1e-18  #: dark current taken of a diode that is said to have none [A]
BIASED = 100.0  #: reverse bias over kT/q beyond which a junction conducts no more

BANDWIDTH_PER_BIT_RATE = 0.7  #: common practice, between noise and eye closure
MIDBAND = 0.01  #: of the bandwidth: where the gain of a data receiver that does not pass DC is stated
GAIN_ROOM = 1.05  #: transimpedance aimed at over the least asked for: tolerances of three resistors; ours
FILTER_ROOM = 1.6  #: bandwidth of a stage over that of stage and filter together where a filter follows; ours


def detected(values: Values, request: ReceiverRequest, detector: str = "D1") -> dict[str, float | Lanes]:
    """Currents, capacitance, gain and responsivity of the detector at the bias, temperature and light of each lane.

    Currents are those that flow, behind an avalanche; what is called shot is the current whose plain shot noise equals
    that of the multiplied one, 2q I M F. Responsivity has the gain in it.
    """
    data, temperature, bias = request.detector, values["temperature"], values["detector.reverse_bias"]
    gain = gain_at(data, bias, temperature)
    noisy = gain * excess_noise(data, gain) if is_avalanche(data) else 1.0
    responsivity = values[f"{detector}.responsivity"] / data.responsivity_gain * gain
    signal, ambient = responsivity * request.signal.power.nominal, values["signal.ambient"] * gain
    dark, multiplied = _dark_currents(values, data, detector)
    return {
        f"{detector}.gain": gain,
        f"{detector}.excess_noise": noisy / gain,
        f"{detector}.responsivity": responsivity,
        f"{detector}.capacitance": data.capacitance_at(bias, values.get(f"{detector}.capacitance")),
        f"{detector}.transit_frequency": _speed(values, data, detector, gain),
        f"{detector}.dark_current": dark + multiplied * gain,
        f"{detector}.shunt_resistance": _shunt(values, data, detector),
        f"{detector}.signal_current": signal,
        f"{detector}.ambient_current": ambient,
        f"{detector}.signal_shot": signal * noisy,
        f"{detector}.ambient_shot": ambient * noisy,
        f"{detector}.dark_shot": dark + multiplied * gain * noisy,
    }


def _dark_currents(values: Values, data: Detector, detector: str) -> tuple[float | Lanes, float | Lanes]:
    """Dark current that is not multiplied, and the one that is, before the gain; at the temperature. [A]

    Where the sheet of an avalanche diode does not part them, all of it counts as multiplied: the noisier way.
    """

    def warm(current: float | Lanes) -> Lanes:
        return np.asarray(
            dark_current(
                dark_current=current,
                temperature=values["temperature"],
                reference_temperature=ROOM_TEMPERATURE,
                doubling=data.dark_current_doubling,
            )
        )

    whole = warm(values[f"{detector}.dark_current"])
    if not is_avalanche(data):
        return whole * _saturation(values["detector.reverse_bias"], values["temperature"]), 0.0
    multiplied = values.get(f"{detector}.multiplied_dark_current")
    if multiplied is None:
        at = data.resting_bias if data.dark_current_bias is None else data.dark_current_bias
        return 0.0, whole / gain_at(data, at, ROOM_TEMPERATURE)
    return warm(values.get(f"{detector}.surface_dark_current", 0.0)), warm(multiplied)


def _shunt(values: Values, data: Detector, detector: str) -> Lanes:
    """Shunt of the junction; where the sheet states none, what a junction of the dark current is near no bias. [Ω]

    It grows as exp(V q/kT) with reverse bias, so that only an unbiased diode has it.
    """
    temperature = np.asarray(values["temperature"], dtype=float)
    warming = 2.0 ** ((temperature - ROOM_TEMPERATURE) / data.dark_current_doubling)
    stated = np.asarray(values[f"{detector}.shunt_resistance"] / warming)
    if data.shunt_resistance is not None:
        return stated
    current = np.maximum(values[f"{detector}.dark_current"] * warming, LEAST_DARK)
    unbiased = np.asarray(unbiased_shunt(saturation_current=current, emission=1.0, temperature=temperature))
    ratio = np.asarray(values["detector.reverse_bias"]) * ELEMENTARY_CHARGE / (BOLTZMANN * temperature)
    return np.asarray(np.minimum(stated, unbiased * np.exp(np.clip(ratio, 0.0, BIASED))))


def _saturation(reverse_bias: float | Lanes, temperature: float | Lanes) -> Lanes:
    """Share of the dark current that flows at a reverse bias, 1 - exp(-V q/kT): none without bias."""
    bias = np.maximum(np.asarray(reverse_bias, dtype=float), 0.0)
    return np.asarray(-np.expm1(-bias * ELEMENTARY_CHARGE / (BOLTZMANN * np.asarray(temperature))))


def _speed(values: Values, data: Detector, detector: str, gain: float | Lanes) -> float | Lanes:
    """Pole of the transit time, and of the build-up of the avalanche where the sheet states it, as one. [Hz]"""
    transit = values[f"{detector}.transit_frequency"]
    if data.gain_bandwidth_product is None:
        return transit
    return 1 / np.sqrt(1 / np.square(transit) + np.square(gain / values[f"{detector}.gain_bandwidth_product"]))


def direction(request: ReceiverRequest) -> float:
    """Sign of the output step that light makes, whichever way the amplifier turns it."""
    sign = POLARITY[request.detector.output]
    return sign if request.inverting else -sign


def level_factor(request: ReceiverRequest) -> float:
    """Power of a one over average power, r/(d r + 1 - d) at a share d of ones; 1 for an analog signal."""
    if request.signal.bit_rate is None:
        return 1.0
    ratio, ones = request.signal.extinction_ratio, request.signal.mark_density
    return ratio / (ones * ratio + 1 - ones)


def one_level(values: Values, request: ReceiverRequest, detector: str = "D1") -> float | Lanes:
    """Photocurrent of a one, ambient light and dark current not in it. [A]"""
    return values[f"{detector}.responsivity"] * values["signal.power"] * level_factor(request)


def detector_limits(request: ReceiverRequest, detector: str = "D1") -> dict[str, Limit]:
    """Limits of what a sheet states as a curve: responsivity at the wavelength, the scale of the capacitance."""
    spreads = facts(PhotodiodeData)

    def limit(figure: str, spread: Spread) -> Limit:
        return Limit(*request.assumed.get(figure, spreads[figure].assumed).limits(spread))

    data = request.detector
    speed = {}
    if data.rise_time is not None:
        rise = limit("rise_time", data.rise_time)
        nominal, low, high = (float(bandwidth_of_rise_time(rise_time=t)) for t in (rise.nominal, rise.high, rise.low))
        speed = {f"{detector}.transit_frequency": Limit(nominal, low, high, rise.assumed)}
    return {
        **speed,
        f"{detector}.responsivity": limit("responsivity", data.responsivity_spread(request.signal.wavelength)),
        f"{detector}.capacitance": limit("capacitance", data.capacitance_figure),
    }


def bias_reach(request: ReceiverRequest, end: float, resting: float | None = None) -> float:
    """Reverse bias at one end, -1 or 1, of the tolerances of its supply and of the amplifier's level. [V]

    Parameters
    ----------
    resting : the bias at nominal, if not that of the request. [V]
    """
    bias = request.detector.resting_bias if resting is None else resting
    supply, level = request.conditions.supply, request.conditions.input_level
    far = level - POLARITY[request.detector.output] * bias
    if not bias or (request.bias is None and far in (supply.positive, supply.negative)):
        return bias * (1 + end * supply.tolerance)
    own = supply.tolerance if request.bias is None else request.bias.tolerance
    return max(bias + end * (own * abs(far) + supply.tolerance * abs(level)), 0.0)


def on_the_bench(
    request: ReceiverRequest, bench: Bench, temperature: float, reverse_bias: float | None = None
) -> dict[str, float]:
    """The detector at one temperature and a bias, the resting one if none is given, in the most light.

    Its currents are at their most.
    """
    most = ("dark_current", "multiplied_dark_current", "surface_dark_current", "responsivity")
    values = {
        name: bench.high(name) if name.removeprefix("D1.") in most else bench.nominal(name)
        for name in bench.limits
        if name.startswith("D1.")
    } | {
        "temperature": temperature,
        "detector.reverse_bias": request.detector.resting_bias if reverse_bias is None else reverse_bias,
        "signal.ambient": bench.high("signal.ambient"),
        "signal.power": bench.high("signal.power"),
    }
    return {name: float(value) for name, value in {**values, **detected(values, request)}.items()}


def brightest(request: ReceiverRequest, bench: Bench) -> dict[str, float]:
    """`on_the_bench` at the end of the temperature range, and of the bias where gain follows it, of most current."""
    biases = [bias_reach(request, end) for end in (-1, 1)] if gain_follows(request.detector) else [None]
    ends = product((bench.high("temperature"), bench.low("temperature")), biases)
    found = [on_the_bench(request, bench, temperature, bias) for temperature, bias in ends]

    def current(values: dict[str, float]) -> float:
        return float(one_level(values, request)) + values["D1.ambient_current"] + values["D1.dark_current"]

    return max(found, key=current)


def wanted_bandwidth(request: ReceiverRequest) -> float | None:
    """Bandwidth required, else what the bit rate or the band calls for. [Hz]"""
    required = request.require.get("bandwidth")
    if required is not None and required.min:
        return required.min
    if request.signal.bit_rate is not None:
        return BANDWIDTH_PER_BIT_RATE * request.signal.bit_rate
    return None if request.signal.band is None else request.signal.band.max


def stage_bandwidth(request: ReceiverRequest) -> float | None:
    """Bandwidth that the stage itself is sized for: more than is wanted where a filter follows. [Hz]"""
    wanted = wanted_bandwidth(request)
    if wanted is None or request.blocks.post_filter is None:
        return wanted
    return FILTER_ROOM * max(wanted, request.blocks.post_filter.cutoff)


def wanted_transimpedance(request: ReceiverRequest) -> float | None:
    """Transimpedance aimed at: between the bounds required, or just above the lower; None without that. [V/A]"""
    bound = request.require.get("transimpedance")
    if bound is None or not bound.min:
        return None
    return (bound.min * bound.max) ** 0.5 if bound.max else GAIN_ROOM * bound.min


def noise_frequency(request: ReceiverRequest) -> float:
    """Where densities are stated: as asked, else a tenth of the bandwidth wanted. [Hz]"""
    return request.target.noise_frequency or (wanted_bandwidth(request) or 1e4) / 10


def noise_band(request: ReceiverRequest) -> tuple[float, float]:
    """Band over which noise is summed: as asked, else all that passes. [Hz]"""
    band = request.target.noise_band
    return decision_band(request) if band is None else (max(band.min, 1.0), band.max)


def decision_band(request: ReceiverRequest) -> tuple[float, float]:
    """From 1 Hz to far beyond the bandwidth wanted: all noise that a decision meets. [Hz]"""
    return 1.0, 100 * (wanted_bandwidth(request) or 1e6)


def midband(request: ReceiverRequest) -> float | None:
    """Frequency at which gain is stated where DC does not pass; None where it does. [Hz]"""
    if not {"servo", "ac_coupling"} & set(request.blocks_asked):
        return None
    top, band = wanted_bandwidth(request) or 1e6, request.signal.band
    return (band.min * top) ** 0.5 if band is not None and band.min else MIDBAND * top
