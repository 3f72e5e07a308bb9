"""What a designer ought to be told about a sized load resistor."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuits.receivers import avalanche
from opto_ckt.circuits.receivers.detector import direction, noise_band, noise_frequency, one_level, stage_bandwidth
from opto_ckt.circuits.receivers.load_resistor.form import equalised, plain_load, said
from opto_ckt.circuits.receivers.load_resistor.operation import most_current, rooms
from opto_ckt.circuits.receivers.load_resistor.sizing import EQUALISED_TO
from opto_ckt.formulas.load_resistor import load_for_bandwidth, load_noise
from opto_ckt.limits import Lanes, Limits, Values
from opto_ckt.request import LoadResistorRequest
from opto_ckt.units import write

THICK_FILM_DROP = 0.05  #: of standing photocurrent, from which the noise of thick film tells; common practice [V]
WORTH_SAYING = 2.0  #: noise power that the other form would save; ours


def remarks(values: Values, limits: Limits, request: LoadResistorRequest) -> tuple[str, ...]:
    """Form, polarity, what ends the range, what the other form would give, where the equaliser does not match."""
    found = [said(request), "output rises with light" if direction(request) > 0 else "output falls with light"]
    found.append(_end_of_range(values, request))
    found += _matching(values) if equalised(request) else _other_form(values, request)
    found += _common_mode(request) + _dark_level(values, request) + _slew_rate(values, request)
    standing = float(np.max((values["D1.signal_current"] + values["D1.ambient_current"]) * values["R1"]))
    if standing > THICK_FILM_DROP and noise_band(request)[0] < 1e3:
        found.append(
            f"R1 carries {write(standing, 'V')} of standing photocurrent: fit thin film, thick film adds 1/f noise"
        )
    return (*found, *avalanche.remarks(request))


def capacitance(values: Values) -> float | Lanes:
    """Across R1; of the differential input only what the loop leaves. [F]"""
    return values["D1.capacitance"] + values["U1.common_capacitance"] + values["CB"]


def _end_of_range(values: Values, request: LoadResistorRequest) -> str:
    """What the node of R1 comes to first as the light grows, and how long it takes."""
    room = {name: float(np.min(volts)) for name, volts in rooms(values, request).items()}
    first = min(room, key=lambda name: room[name])
    time = write(float(np.median(values["R1"] * capacitance(values))), "s")
    return (
        f"more light ends at the {first}, {write(room[first], 'V')} from the level of R1; overload counts a run long"
        f" against R1 and its capacitance, {time}"
    )


def _matching(values: Values) -> list[str]:
    """By how much zero and pole miss each other over the corners: a step that settles slowly, high or low."""
    pole, zero = values["R1"] * capacitance(values), (values["R4"] + values["R5"]) * values["C5"]
    miss = 20 * np.log10(np.asarray(zero / pole))
    gain, turn = float(np.median(1 + values["R4"] / values["R5"])), 1 / (2 * np.pi * float(np.median(pole)))
    return [
        f"the current integrates above {write(turn, 'Hz')}, the equaliser lifts it {gain:.3g} times; over the corners"
        f" zero and pole leave {float(np.min(miss)):+.1f} … {float(np.max(miss)):+.1f} dB between high and low"
        " frequencies: trim R5 against a step of light"
    ]


def _other_form(values: Values, request: LoadResistorRequest) -> list[str]:
    """Noise with R1 as large as range and amplifier allow an equaliser, where that is far less."""
    bandwidth, load = stage_bandwidth(request), float(np.median(values["R1"]))
    if bandwidth is None or plain_load(request) is None:
        return []
    across, frequency = float(np.median(capacitance(values))), noise_frequency(request)
    room = np.minimum.reduce(np.broadcast_arrays(*rooms({**values, "buffer.gain": 1.0}, request).values()))
    bound = request.require.get("output_swing")
    swing = min(float(np.min(room)), np.inf if bound is None or bound.max is None else bound.max)
    by_light = swing / max(float(np.max(most_current(values, request))), 1e-12)
    by_gain = float(np.min(values["U1.gain_bandwidth"])) / (EQUALISED_TO * bandwidth)
    larger = min(
        by_light, float(load_for_bandwidth(capacitance=across, bandwidth=EQUALISED_TO * bandwidth / max(by_gain, 1e-9)))
    )
    if larger <= load:
        return []
    here, there = (
        float(
            load_noise(
                load_resistance=resistance,
                current=float(np.median(values["D1.dark_shot"] + values["D1.ambient_shot"])),
                temperature=float(np.median(values["temperature"])),
                voltage_noise=float(np.median(values["U1.voltage_noise"])),
                current_noise=float(np.median(values["U1.current_noise"])),
                capacitance=across,
                frequency=frequency,
            )
        )
        for resistance in (load, larger)
    )
    if (here / there) ** 2 < WORTH_SAYING:
        return []
    return [
        f'target.front_end = "high_impedance" would allow R1 up to {write(larger, "Ω")} and take the input noise at'
        f" {write(frequency, 'Hz')} from {write(here, 'A/√Hz')} to {write(there, 'A/√Hz')}, before the equaliser's own"
    ]


def _common_mode(request: LoadResistorRequest) -> list[str]:
    record = request.amplifier
    rail = record.common_mode_to_positive if direction(request) > 0 else record.common_mode_to_negative
    if rail is not None:
        return []
    side = "positive" if direction(request) > 0 else "negative"
    return [f"the sheet of U1 gives no common_mode_to_{side}: its input is taken to work up to that rail"]


def _dark_level(values: Values, request: LoadResistorRequest) -> list[str]:
    """Whether output and input of U1 work where light leaves them in the dark."""
    level, record = np.asarray(values["input_level"]), request.amplifier
    below = record.swing_to_negative.high, record.common_mode_to_negative
    above = record.swing_to_positive.high, record.common_mode_to_positive
    down = max(below[0], below[1].high if below[1] is not None else below[0])
    up = max(above[0], above[1].high if above[1] is not None else above[0])
    if float(np.min(level - values["supply.negative"])) >= down and (
        float(np.min(values["supply.positive"] - level)) >= up
    ):
        return []
    return ["U1 cannot work at its dark level: move conditions.input_level or add a negative supply"]


def _slew_rate(values: Values, request: LoadResistorRequest) -> list[str]:
    bandwidth = stage_bandwidth(request)
    step = float(np.max(one_level(values, request) * values["load.transimpedance"]))
    if bandwidth is None or (needed := float(2 * np.pi * bandwidth * step / 2)) <= request.amplifier.slew_rate.low:
        return []
    slow = write(request.amplifier.slew_rate.low, "V/s")
    return [f"slew rate: the largest step asks for {write(needed, 'V/s')}, U1 gives {slow}"]
