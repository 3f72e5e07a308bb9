"""The light on the detector and what the detector makes of it, for every receiver."""

from __future__ import annotations

import numpy as np

from opto_ckt.constants import BOLTZMANN, ELEMENTARY_CHARGE, ROOM_TEMPERATURE
from opto_ckt.formulas.transit import bandwidth_of_rise_time
from opto_ckt.limits import Lanes, Limit, Values
from opto_ckt.parts.photodiode import PhotodiodeData
from opto_ckt.parts.record import Spread, facts
from opto_ckt.request import ReceiverRequest

POLARITY = {"cathode": 1.0, "anode": -1.0}
"""Sign of the output step that light makes, by the end of the diode that feeds an inverting amplifier."""

BANDWIDTH_PER_BIT_RATE = 0.7  #: common practice, between noise and eye closure


def detected(values: Values, request: ReceiverRequest, detector: str = "D1") -> dict[str, float | Lanes]:
    """Currents, capacitance and responsivity of the detector at the bias, temperature and light of each lane."""
    data = request.detector
    temperature = values["temperature"]
    return {
        f"{detector}.capacitance": data.capacitance_at(
            values["detector.reverse_bias"], values.get(f"{detector}.capacitance")
        ),
        f"{detector}.dark_current": data.dark_current_at(temperature, values[f"{detector}.dark_current"])
        * _saturation(values["detector.reverse_bias"], temperature),
        f"{detector}.shunt_resistance": values[f"{detector}.shunt_resistance"]
        * 2.0 ** (-(np.asarray(temperature) - ROOM_TEMPERATURE) / data.dark_current_doubling),
        f"{detector}.signal_current": values[f"{detector}.responsivity"] * request.signal.power.nominal,
        f"{detector}.ambient_current": values["signal.ambient"],
    }


def _saturation(reverse_bias: float | Lanes, temperature: float | Lanes) -> Lanes:
    """Share of the dark current that flows at a reverse bias, 1 - exp(-V q/kT): none without bias."""
    bias = np.maximum(np.asarray(reverse_bias, dtype=float), 0.0)
    return np.asarray(-np.expm1(-bias * ELEMENTARY_CHARGE / (BOLTZMANN * np.asarray(temperature))))


def level_factor(request: ReceiverRequest) -> float:
    """Power of a one over average power, 2 r/(r + 1) at equal numbers of ones and zeros; 1 for an analog signal."""
    if request.signal.bit_rate is None:
        return 1.0
    ratio = request.signal.extinction_ratio
    return 2 * ratio / (ratio + 1)


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


def wanted_bandwidth(request: ReceiverRequest) -> float | None:
    """Bandwidth required, else what the bit rate or the band calls for. [Hz]"""
    required = request.require.get("bandwidth")
    if required is not None and required.min:
        return required.min
    if request.signal.bit_rate is not None:
        return BANDWIDTH_PER_BIT_RATE * request.signal.bit_rate
    return None if request.signal.band is None else request.signal.band.max


def noise_frequency(request: ReceiverRequest) -> float:
    """Where densities are stated: as asked, else a tenth of the bandwidth wanted. [Hz]"""
    return request.target.noise_frequency or (wanted_bandwidth(request) or 1e4) / 10


def noise_band(request: ReceiverRequest) -> tuple[float, float]:
    """Band over which noise is summed: as asked, else from 1 Hz to far beyond the bandwidth wanted. [Hz]"""
    band = request.target.noise_band
    if band is None:
        return 1.0, 100 * (wanted_bandwidth(request) or 1e6)
    return max(band.min, 1.0), band.max
