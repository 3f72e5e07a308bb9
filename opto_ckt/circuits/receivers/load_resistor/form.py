"""Which form a request gets: a plain load with a buffer, with gain, or a large load with an equaliser; and why."""

from __future__ import annotations

from opto_ckt.circuits.receivers import board
from opto_ckt.circuits.receivers.detector import (
    GAIN_ROOM,
    detector_limits,
    level_factor,
    noise_frequency,
    stage_bandwidth,
    wanted_transimpedance,
)
from opto_ckt.formulas.load_resistor import load_for_bandwidth, load_noise
from opto_ckt.parts.avalanche import is_avalanche
from opto_ckt.request import LoadResistorRequest
from opto_ckt.topology import GROUND
from opto_ckt.units import write

HIGH = "high_impedance"
CLEAR = 2.0  #: load for the bandwidth alone over the transimpedance, from which no gain is needed; ours


def plain_load(request: LoadResistorRequest) -> float | None:
    """Load that has the bandwidth by itself, every part nominal, the amplifier without limits. [Ω]

    It takes the capacitance that the sheet lists, so that a gain found by trial does not change the form.
    """
    bandwidth = stage_bandwidth(request)
    if bandwidth is None:
        return None
    capacitance = request.detector.capacitance_figure.nominal + request.amplifier.common_capacitance.nominal
    capacitance += request.conditions.board_capacitance
    return float(load_for_bandwidth(capacitance=capacitance, bandwidth=bandwidth))


def equalised(request: LoadResistorRequest) -> bool:
    """Whether the load is large, an equaliser behind it: as asked, else where a plain load is too loud."""
    form = request.target.front_end
    if form is not None:
        return form == HIGH
    loud, bound = _plain_noise(request), _noise_bound(request)
    return loud is not None and bound is not None and loud > bound


def amplified(request: LoadResistorRequest) -> bool:
    """Whether U1 has gain at DC: where more is asked for than a plain load gives, and no later stage gives it."""
    wanted, load = asked_transimpedance(request), plain_load(request)
    if equalised(request) or wanted is None or "gain_stage" in request.blocks_asked:
        return False
    return load is None or wanted > load / CLEAR


def raised(request: LoadResistorRequest) -> bool:
    """Whether R1 goes to a level above ground, which then has a buffer."""
    return board.level_node(request) != GROUND


def asked_transimpedance(request: LoadResistorRequest) -> float | None:
    """Transimpedance aimed at: as required, or what the least light needs for the swing required; else None. [V/A]"""
    bound, least = request.require.get("output_swing"), request.signal.power.min
    found = [wanted_transimpedance(request)]
    if bound is not None and bound.min and least:
        current = detector_limits(request)["D1.responsivity"].low * least * level_factor(request)
        found.append(GAIN_ROOM * bound.min / current)
    return max((value for value in found if value is not None), default=None)


def said(request: LoadResistorRequest) -> str:
    """The form and why, in a sentence."""
    form = "high impedance with an equaliser" if equalised(request) else "low impedance"
    loud, bound = _plain_noise(request), _noise_bound(request)
    if request.target.front_end is not None:
        why = "as target.front_end asks"
    elif loud is None or bound is None:
        why = "nothing asked for needs less noise than it has"
    else:
        sign = "above" if loud > bound else "within"
        why = f"a load for the bandwidth alone makes up to {write(loud, 'A/√Hz')} with its amplifier,"
        why += f" {sign} the {write(bound, 'A/√Hz')} allowed"
    return f"{form}: {why}"


def _plain_noise(request: LoadResistorRequest) -> float | None:
    """Input noise with the load for the bandwidth alone: hot, most capacitance, the loudest amplifier. [A/√Hz]"""
    bandwidth, amplifier = stage_bandwidth(request), request.limits("amplifier")
    if bandwidth is None:
        return None
    capacitance = detector_limits(request)["D1.capacitance"].high + amplifier["common_capacitance"][2]
    capacitance += request.conditions.board_capacitance
    hottest = request.conditions.temperature.high
    dark = request.detector.dark_current_at(hottest, request.detector.dark_current.high)
    return float(
        load_noise(
            load_resistance=load_for_bandwidth(capacitance=capacitance, bandwidth=bandwidth),
            current=float(dark) + request.ambient_current.high,
            temperature=hottest,
            voltage_noise=amplifier["voltage_noise"][2],
            current_noise=amplifier["current_noise"][2],
            capacitance=capacitance,
            frequency=noise_frequency(request),
        )
    )


def _noise_bound(request: LoadResistorRequest) -> float | None:
    """Least noise current density asked for; None where nothing is, or where an avalanche drowns the load. [A/√Hz]"""
    if is_avalanche(request.detector):
        return None
    current, power = request.require.get("input_noise_density"), request.require.get("nep_density")
    bounds = [] if current is None or not current.max else [current.max]
    if power is not None and power.max:
        bounds.append(power.max * detector_limits(request)["D1.responsivity"].low)
    return min(bounds, default=None)
