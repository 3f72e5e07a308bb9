"""The transistor as a switch, bipolar or MOSFET: what it drops, what it lets through, how well it is driven."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

from opto_ckt.circuits.receivers.bipolar import DRIFT
from opto_ckt.constants import BOLTZMANN, ELEMENTARY_CHARGE, ROOM_TEMPERATURE
from opto_ckt.formulas.switching import storage_delay
from opto_ckt.limits import Lanes, Values
from opto_ckt.parts.transistor import BipolarData
from opto_ckt.request import LedSwitchRequest
from opto_ckt.topology import OPEN, SHORT

CHANNEL_DRIFT = 5e-3  #: of an on-resistance, relative; 0.4 to 0.7 %/K of small MOSFETs, common practice [1/K]
FAINT = 1e-12  #: base current that stands for none [A]
LEAST_OVER = 0.05  #: gate voltage over the threshold from which on a channel is taken to conduct [V]
STATED_DRIVE = 10.0  #: sheets state storage at base currents of a tenth of the collector's, either way; common practice
MOST_EDGE = 0.5  #: of that base current, what just saturates: whatever stores was driven twice over; common practice


class Driven(NamedTuple):
    """A switch as its drive leaves it."""

    control: Lanes  #: voltage at base or gate [V]
    drawn: Lanes  #: out of the logic output [A]
    base: Lanes  #: into the base; none of a gate [A]
    drop: Lanes  #: collector to emitter, saturated [V]
    resistance: Lanes  #: of the channel [Ω]
    most: Lanes  #: current that it lets through [A]
    overdrive: Lanes  #: see the figure [1]


def driven(values: Values, request: LedSwitchRequest) -> Driven:
    """How the logic output drives the switch; ``U1.stuck`` 1 where it rests low, ``Q1.short`` 1 where Q1 is a short."""
    off = np.asarray(values.get("U1.stuck", 0.0)) > 0
    level = np.where(off, values["U1.low"], values["U1.high"])
    source = np.where(off, values["U1.sink_resistance"], values["U1.source_resistance"])
    series, bleed = np.asarray(values["R2"]) + source, np.asarray(values["R3"], dtype=float)
    found = (_base if isinstance(request.transistor, BipolarData) else _gate)(values, request, level, series, bleed)
    shorted = np.asarray(values.get("Q1.short", 0.0)) > 0
    return found._replace(
        drop=np.where(shorted, 0.0, found.drop),
        resistance=np.where(shorted, SHORT, found.resistance),
        most=np.where(shorted, OPEN, found.most),
    )


def _base(values: Values, request: LedSwitchRequest, level: Lanes, series: Lanes, bleed: Lanes) -> Driven:
    junction = np.asarray(values["Q1.base_emitter_voltage"] + DRIFT * (values["temperature"] - ROOM_TEMPERATURE))
    control = np.minimum(junction, np.maximum(level, 0.0) * bleed / (series + bleed))
    drawn = (level - control) / series
    base = np.maximum(drawn - control / bleed, 0.0)
    most = values["Q1.current_gain"] * base
    return Driven(
        control, drawn, base, np.asarray(values["Q1.saturation_voltage"]), np.full_like(base, SHORT), most, most
    )


def _gate(values: Values, request: LedSwitchRequest, level: Lanes, series: Lanes, bleed: Lanes) -> Driven:
    control = level * bleed / (series + bleed)
    threshold = np.asarray(values["Q1.threshold_voltage"])
    over, stated = control - threshold, getattr(request.transistor, "on_resistance_gate", 0.0)
    warm = 1 + CHANNEL_DRIFT * (values["temperature"] - ROOM_TEMPERATURE)
    share = np.maximum(stated - threshold, LEAST_OVER) / np.maximum(over, LEAST_OVER)
    resistance = np.where(over > LEAST_OVER, values["Q1.on_resistance"] * warm * np.maximum(share, 1.0), OPEN)
    none = np.zeros_like(resistance)
    return Driven(
        control, level / (series + bleed), none, none, resistance, np.where(over > 0, OPEN, 0.0), control / stated
    )


def control_figures(values: Values, request: LedSwitchRequest, state: Driven) -> dict[str, float | Lanes]:
    """What the linear network and the decks read of the switch."""
    if not isinstance(request.transistor, BipolarData):
        return {
            "Q1.on_resistance": state.resistance, "Q1.drop": 0.0, "Q1.control_level": 0.0,
            "Q1.control_capacitance": values["Q1.input_capacitance"], "Q1.control_conductance": 1e-15,
        }  # fmt: skip
    thermal = BOLTZMANN * values["temperature"] / ELEMENTARY_CHARGE
    conductance = np.maximum(state.base, FAINT) / thermal
    return {
        "Q1.on_resistance": state.resistance,
        "Q1.drop": state.drop,
        "Q1.control_conductance": conductance,
        "Q1.control_level": state.control - state.base / conductance,
        "Q1.control_capacitance": values["Q1.collector_capacitance"],
    }


def time_constant(stored: float | Lanes, gain: float | Lanes) -> Lanes:
    """That of the base's charge, of which the sheet's storage time is what base currents of a tenth leave. [s]"""
    return np.asarray(stored / np.log(2 / (1 + np.minimum(STATED_DRIVE / np.asarray(gain), MOST_EDGE))))


def storage(values: Values, request: LedSwitchRequest, collector: Lanes, state: Driven) -> Lanes:
    """Time that a bipolar switch goes on conducting once its drive has gone; none where no sheet states it. [s]

    A speed-up capacitor takes its own charge out of the base at once; the rest leaves as without it.
    """
    if "Q1.storage_time" not in values or values["Q1.storage_time"] is None:
        return np.zeros_like(np.asarray(collector, dtype=float))
    gain = np.asarray(values["Q1.current_gain"])
    constant = time_constant(values["Q1.storage_time"], gain)
    removal = state.control / values["R3"] + np.maximum(state.control - values["U1.low"], 0.0) / (
        values["R2"] + values["U1.sink_resistance"]
    )
    drive = np.maximum(state.base, FAINT)
    edge = np.clip(np.asarray(collector) / gain, FAINT, drive)
    swing = values["U1.high"] - state.drawn * values["U1.source_resistance"] - values["U1.low"]
    drive = np.maximum(drive - np.asarray(values.get("C1", 0.0)) * np.maximum(swing, 0.0) / constant, edge)
    return np.asarray(storage_delay(time_constant=constant, drive=drive, removal=removal, edge=edge))
