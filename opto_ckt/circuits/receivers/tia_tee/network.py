"""What the tee is at DC and to noise, and what a designer ought to be told about it."""

from __future__ import annotations

import numpy as np

from opto_ckt.analyses.network import Evaluation
from opto_ckt.circuit import OnDemand, Refusal, Stress
from opto_ckt.circuits.receivers import refusals
from opto_ckt.circuits.receivers.board import exactly, stray
from opto_ckt.circuits.receivers.feedback import loads, operation
from opto_ckt.circuits.receivers.feedback import remarks as feedback_remarks
from opto_ckt.circuits.receivers.feedback.operation import FeedbackFigures
from opto_ckt.circuits.receivers.feedback.stage import LARGEST_CHIP
from opto_ckt.circuits.receivers.tia_tee.structure import capacitive, resistive
from opto_ckt.formulas.feedback_network import tee_capacitance, tee_resistance
from opto_ckt.limits import Figures, Lanes, Limit, Limits, Values
from opto_ckt.preferred import CHIP_RESISTORS
from opto_ckt.request import OpAmpReceiverRequest
from opto_ckt.units import write


def given(request: OpAmpReceiverRequest) -> dict[str, Limit]:
    """As of any transimpedance stage; the body of R1 ends at the tee, only the board's own stray lies across it all."""
    limits = operation.given(request)
    if capacitive(request):
        limits["RT"] = exactly(request.conditions.leakage_resistance)
    if resistive(request):
        body = CHIP_RESISTORS[request.preferred.resistors.size].body_capacitance
        limits |= {"CS": stray(request.conditions.feedback_stray), "CR": stray(body)}
    return limits


def bias(values: Values, request: OpAmpReceiverRequest) -> dict[str, float | Lanes]:
    """Levels with what the tee is equal to; its ratio multiplies the offset."""
    if not resistive(request):
        return operation.biased(values, request, values["R1"])
    feedback = tee_resistance(first=values["R1"], second=values["R4"], shunt=values["R5"])
    return operation.biased(values, request, feedback, values["R4"] / values["R5"])


class TeeFigures(FeedbackFigures):
    """The receiver's figures; of a capacitive tee the noise gain of all three parts."""

    def _feedback_capacitance(self) -> Lanes | float:
        values = self._values
        if "C4" not in values:
            return super()._feedback_capacitance()
        return _tee_capacitance(values) + values["CS"]


def figures(values: Values, evaluation: Evaluation, request: OpAmpReceiverRequest) -> Figures:
    """Every figure that the receiver offers, each computed when it is asked for."""
    return OnDemand(TeeFigures(values, evaluation, request), operation.OFFERS)


def stresses(values: Values, request: OpAmpReceiverRequest) -> tuple[Stress, ...]:
    """Most light and dark current through R1; the output across the rest of the tee."""
    current = loads.most_current(values, request)
    output = current * values["feedback_resistance"]
    found = [
        Stress("R1", power=current**2 * values["R1"], voltage=current * values["R1"], current=current),
        *(Stress(ref, voltage=output) for ref in ("C1", "C4", "C5") if ref in values),
    ]
    if "R4" in values:
        joint = current * values["R1"]
        found += [
            Stress("R4", power=(output - joint) ** 2 / values["R4"], voltage=output - joint),
            Stress("R5", power=joint**2 / values["R5"], voltage=joint),
        ]
    return (*found, *loads.around(values, request))


def remarks(values: Values, limits: Limits, request: OpAmpReceiverRequest) -> tuple[str, ...]:
    """What the tee costs against a real part, and whether there is one."""
    found = list(feedback_remarks.remarks(values, limits, request))
    if resistive(request):
        equal, first = float(np.median(values["feedback_resistance"])), float(np.median(values["R1"]))
        price, ratio = (equal / first) ** 0.5, float(np.median(values["feedback_ratio"]))
        found.append(
            f"the tee is equal to {write(equal, 'Ω')} with the thermal noise current of {write(first, 'Ω')}:"
            f" {price:.3g} times that of a real resistor, and {1 + ratio:.3g} times the offset"
        )
        if equal <= LARGEST_CHIP:
            found.append(
                f"a real resistor of {write(equal, 'Ω')} exists (up to {write(LARGEST_CHIP, 'Ω')} are usual) and is"
                " quieter: circuit tia"
            )
    if capacitive(request) and np.any(values["C1"]):
        equal = float(np.median(tee_capacitance(first=values["C1"], second=values["C4"], shunt=values["C5"])))
        found.append(
            f"the tee is equal to {write(equal, 'F')}; C1 adds nearly {write(float(np.median(values['C1'])), 'F')} to"
            " the summing node"
        )
    return tuple(found)


def _tee_capacitance(values: Values) -> Lanes:
    """What C1, C4 and C5 are equal to; nothing where the tee is empty. [F]"""
    first, second = np.asarray(values["C1"], dtype=float), np.asarray(values["C4"], dtype=float)
    shunt = np.asarray(values["C5"], dtype=float)
    fitted = (first > 0) & (second > 0)
    return np.where(fitted, tee_capacitance(first=first, second=second, shunt=np.where(fitted, shunt, 1.0)), 0.0)


def refused(request: OpAmpReceiverRequest) -> tuple[Refusal, ...]:
    """A level above ground, from whose divider a tee would draw its current."""
    found = refusals.refused(request)
    if request.conditions.input_level > 0 and resistive(request):
        message = "the tee returns to ground: it needs a negative supply and an input level of 0 V"
        return (*found, Refusal(("conditions", "input_level"), message))
    return found
