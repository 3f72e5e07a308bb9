"""R1 and C1 together: the largest resistance for which the capacitance still has a window."""

from __future__ import annotations

from typing import NamedTuple

from opto_ckt.circuit import Fitted
from opto_ckt.circuits.receivers.feedback.capacitor import feedback_capacitor
from opto_ckt.circuits.receivers.feedback.resistor import feedback_resistance
from opto_ckt.circuits.receivers.feedback.stage import Stage
from opto_ckt.formulas import second_order
from opto_ckt.units import write

SHRINKING = 0.88  #: of R1, a step, where C1 has no window
STEPS = 10  #: at most; R1 then is down to a quarter


class Pair(NamedTuple):
    """The feedback around an amplifier."""

    resistance: float
    capacitor: Fitted


def feedback_pair(stage: Stage, larger: Stage | None = None) -> Pair:
    """Both sized twice: the overshoot that C1 leaves at its worst corner takes its share of the swing.

    Where no C1 both damps and keeps the bandwidth at all corners, R1 shrinks until one does, or as far as makes sense.

    Parameters
    ----------
    larger : what R1 is sized on, where a part beside the amplifier takes of the bandwidth; else the stage itself.

    Raises
    ------
    InfeasibleError : the output has no headroom, or no C1 both damps the response and keeps the op amp stable.
    """
    overshoot = float(second_order.overshoot(quality=stage.quality)) if stage.quality > 0.5 else 0.0
    fixed = stage.fixed("R1")
    for _ in range(2):
        resistance = fixed or feedback_resistance(larger or stage, overshoot)
        damped = feedback_capacitor(stage, resistance)
        overshoot = damped.overshoot
    if damped.windowed or fixed is not None:
        return Pair(resistance, damped.fitted)
    smaller = resistance
    for _ in range(STEPS):
        smaller *= SHRINKING
        tried = feedback_capacitor(stage, smaller)
        if tried.windowed:
            reason = stage.derivation.reasons.get("R1", "")
            told = f"{write(resistance, 'Ω')} lowered until C1 has a window at every corner"
            stage.derivation.note("R1", f"{told}; {reason}")
            return Pair(smaller, tried.fitted)
    return Pair(resistance, feedback_capacitor(stage, resistance).fitted)
