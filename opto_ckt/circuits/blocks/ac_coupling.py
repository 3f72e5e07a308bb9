"""Coupling capacitor at the output, sized from the sag that the longest run of equal bits may have.

in ---| C40 |---+--- out
              [ R40 ]
               level
"""

from __future__ import annotations

import numpy as np

from opto_ckt.circuit import Bench, Block, Fitted, Refusal, Stress
from opto_ckt.circuits.blocks.cutoff import allowed
from opto_ckt.circuits.receivers.board import level_node
from opto_ckt.derivation import Derivation
from opto_ckt.formulas.coupling import corner_for_droop, droop_penalty
from opto_ckt.formulas.reference import filter_capacitance, parallel_resistance
from opto_ckt.limits import Limits, Values
from opto_ckt.request import ReceiverRequest
from opto_ckt.topology import Capacitor, Resistor, Topology
from opto_ckt.units import percent, write

RETURN = 10e3  #: R40 without a load of its own: far below leakages; common practice [Ω]
BESIDE_LOAD = 10.0  #: R40 over the load that it stands beside; common practice
SHRUNK = 0.75  #: what a class 2 capacitor keeps over temperature and ageing, common practice


def topology(request: ReceiverRequest) -> Topology:
    """Series capacitor and the way back to the level."""
    level = level_node(request)
    return Topology(
        elements=(
            Capacitor("C40", "in", "out", role="coupling", stock="bypass", at=(0, 0), to=(3, 0)),
            Resistor("R40", "out", level, role="return", at=(3.5, 0), to=(3.5, -2)),
        ),
        input="",
        output=("out", level),
        wires=(((3, 0), (4.5, 0)),),
        marks=(((3.5, -2), level),),
        end=(4.5, 0),
    )


def propose(request: ReceiverRequest, derivation: Derivation, bench: Bench, exact: Values) -> tuple[Fitted, ...]:
    """R40 beside the load, C40 for the low cut-off at its worst tolerance."""
    corner, reason = allowed(request, request.blocks.ac_coupling) or (1.0, "")
    load, stock = request.load.resistance, request.preferred.bypass
    back = request.fixed.get("R40", RETURN if load is None else BESIDE_LOAD * load)
    derivation.note(
        "R40", f"{write(RETURN, 'Ω')}, common practice" if load is None else f"{BESIDE_LOAD:g} times the load"
    )
    total = back if load is None else float(parallel_resistance(first=back, second=load))
    capacitance = request.fixed.get("C40") or derivation.compute(
        "C40", filter_capacitance, reason=f"{reason}, tolerance and class 2 taken off",
        resistance=total, corner=SHRUNK * (1 - stock.tolerance) * corner,
    )  # fmt: skip
    series = request.preferred.resistors.series
    return (
        Fitted("C40", capacitance, stock.series, low=capacitance, high=10 * capacitance, fixed="C40" in request.fixed),
        Fitted("R40", back, series, low=back / 1.05, high=back * 1.05, fixed="R40" in request.fixed),
    )


def stresses(values: Values, request: ReceiverRequest) -> tuple[Stress, ...]:
    """The amplifier's output at its limit across the capacitor, its swing across the return."""
    volts = np.maximum(values["supply.positive"], np.abs(values["supply.negative"]))
    return (Stress("C40", voltage=volts), Stress("R40", power=volts**2 / values["R40"], voltage=volts))


def remarks(values: Values, limits: Limits, request: ReceiverRequest) -> tuple[str, ...]:
    """What the sag costs."""
    signal, load = request.signal, request.load.resistance
    if signal.bit_rate is None:
        return ()
    back = values["R40"] if load is None else parallel_resistance(first=values["R40"], second=load)
    cutoff = float(np.max(1 / (2 * np.pi * back * values["C40"])))
    droop = -np.expm1(-2 * np.pi * cutoff * signal.run_length / signal.bit_rate)
    penalty = write(float(droop_penalty(droop=droop)), "dB")
    run = f"{signal.run_length} equal bits"
    return (f"coupling: up to {percent(float(droop))} of droop after {run} costs {penalty} of light",)


def refused(request: ReceiverRequest) -> tuple[Refusal, ...]:
    """An analog band that begins at DC."""
    if allowed(request, request.blocks.ac_coupling) is None:
        message = "needs low_cutoff in it, or min under signal.band: this band begins at dc"
        return (Refusal(("blocks", "ac_coupling"), message),)
    return ()


BLOCK = Block(
    name="ac_coupling",
    topology=topology,
    propose=propose,
    stresses=stresses,
    remarks=remarks,
    refused=refused,
    formulas=(corner_for_droop, filter_capacitance, droop_penalty),
)
