"""Supply of the constant-current laser driver shared out: fail-safe resistor, sense voltage, the transistor's drive."""

from __future__ import annotations

from collections.abc import Callable
from typing import NamedTuple

import numpy as np

from opto_ckt.circuit import Bench
from opto_ckt.circuits.drivers.laser import Most, asked_current, safe_current
from opto_ckt.circuits.drivers.side import side_of
from opto_ckt.circuits.drivers.slack import (
    STEP,
    Sharing,
    current_spread,
    offset_error,
)
from opto_ckt.circuits.drivers.spread import resistor_spread
from opto_ckt.derivation import Derivation
from opto_ckt.errors import InfeasibleError
from opto_ckt.formulas import driver
from opto_ckt.preferred import CHIP_RESISTORS
from opto_ckt.request import LaserDriverRequest
from opto_ckt.units import percent, write

SENSE_LEAST, SENSE_MOST = 0.1, 0.5
"""Sense voltage: below, noise and offset; above, heat and lost compliance; common practice [V]"""

STEER = 0.9  #: highest share of the reference voltage that a divider is set to
FURTHEST = 8.0  #: how far a supply or a current is moved in the search for one that would do


class Share(NamedTuple):
    """What the budget gives."""

    asked: float  #: [A]
    worst: float  #: with the spread of reference and resistors on top [A]
    most: Most
    sense: float  #: voltage over R1 [V]
    series: tuple[float, float]  #: R7, least and most [Ω]


def budget(request: LaserDriverRequest, derivation: Derivation, bench: Bench) -> Share:
    """Sense voltage and fail-safe resistor.

    Raises
    ------
    InfeasibleError : the laser does not stand the current in every state, or the supply is too low for it.
    """
    asked = asked_current(request, derivation)
    worst = asked * (1 + current_spread(request, bench))
    most = safe_current(request, bench, derivation)
    if most.current < worst:
        raise InfeasibleError(
            f"{write(worst, 'A')}, {write(asked, 'A')} with the tolerances of reference and resistors, is more than the"
            f" laser stands: {most.reason}",
            [
                f"signal.current ≤ {write(most.current * asked / worst, 'A')}",
                f"a laser with a higher {'power_max' if most.by_power else 'current_max'}",
                *(["conditions.temperature.min higher"] if most.by_power else []),
            ],
        )
    return shared_out(request, derivation, bench, Demand(asked, worst, most, "signal.current", asked, "A"))


class Demand(NamedTuple):
    """Current that the supply is shared out for, and the key of the design file that asks for it."""

    asked: float  #: [A]
    worst: float  #: [A]
    most: Most
    key: str
    lever: float  #: what `key` asks for, above an offset in the same proportion as the current
    unit: str
    offset: float = 0.0  #: current that `key` does not change [A]

    def lowered(self, scale: float) -> str:
        """What `key` would have to be for a worst current so many times smaller."""
        left = (self.worst / scale - self.offset) / (self.worst - self.offset)
        return f"{self.key} ≤ {write(max(left, 0.0) * self.lever, self.unit)}"


def shared_out(request: LaserDriverRequest, derivation: Derivation, bench: Bench, demand: Demand) -> Share:
    """Sense voltage and fail-safe resistor for a current.

    Raises
    ------
    InfeasibleError : the supply is too low for it.
    """
    asked, worst, most = demand.asked, demand.worst, demand.most
    share = Sharing(request, bench, most)
    _refuse_low_supply(share, demand)
    least = share.least_series(1.0)
    sense = _sense_voltage(share, derivation, asked, worst)
    note_series(share, derivation)
    spare = share.slack(worst, sense).path - share.margin
    high = (least * STEP + max(spare, 0.0) / worst) / (1 + resistor_spread(request))
    return Share(asked, worst, most, sense, (least, max(high, least * STEP)))


def _refuse_low_supply(share: Sharing, demand: Demand) -> None:
    worst = demand.worst
    slack = share.slack(worst, SENSE_LEAST)
    short = min(slack)
    if short >= 0:
        return
    lowest = write(share.low["supply.positive"], "V")
    if slack.path <= slack.drive:
        series = share.least_series(1.0)
        parts = {
            "laser": share.laser_voltage("high", worst),
            "R7": worst * series * STEP * (1 + resistor_spread(share.request)),
            "sense voltage": SENSE_LEAST,
        }
        spent = ", ".join(f"{name} {write(volts, 'V')}" for name, volts in parts.items())
        reason = f"the lowest supply, {lowest}, is {write(-short, 'V')} short at {write(worst, 'A')}: {spent},"
        reason += " transistor the rest"
    else:
        reason = (
            f"the op amp, at the lowest supply of {lowest}, is {write(-short, 'V')} short of driving the transistor"
        )
    raise InfeasibleError(reason, _remedies(share, demand))


def _remedies(share: Sharing, demand: Demand) -> list[str]:
    """A supply that would do, a current that would do, and how much longer the laser would have to stand."""
    worst = demand.worst
    supply = _first(lambda scale: min(share.slack(worst, SENSE_LEAST, scale)) >= 0)
    found = []
    if supply is not None:
        nominal = share.bench.nominal("supply.positive") * supply
        beyond = nominal * (1 + share.request.conditions.supply.tolerance) > share.request.amplifier.supply_max
        found.append(
            f"conditions.supply.positive ≥ {write(nominal, 'V')}"
            + (" with an amplifier that stands it" if beyond else "")
        )
    current = _first(lambda scale: min(share.slack(worst / scale, SENSE_LEAST)) >= 0)
    if current is not None:
        found.append(demand.lowered(current))

    def stands(scale: float) -> bool:
        hardier = Sharing(share.request, share.bench, share.most._replace(current=share.most.current * scale))
        return min(hardier.slack(worst, SENSE_LEAST)) >= 0

    stronger = _first(stands)
    if stronger is not None:
        found.append(f"a laser that stands {write(share.most.current * stronger, 'A')} in the cold")
    return found


def _first(does: Callable[[float], bool]) -> float | None:
    """Least factor above 1 that does; None if none up to `FURTHEST` does."""
    missed, met = 1.0, None
    for factor in np.geomspace(1.02, FURTHEST, 60):
        if does(float(factor)):
            met = float(factor)
            break
        missed = float(factor)
    if met is None:
        return None
    for _ in range(20):
        middle = (missed * met) ** 0.5
        missed, met = (missed, middle) if does(middle) else (middle, met)
    return met


def note_series(share: Sharing, derivation: Derivation) -> None:
    """How R7 came about; the transistor and the sense resistor count as shorted."""
    if "R7" in share.request.fixed:
        derivation.note("R7", "fixed in the design file")
        return
    supply, voltage = share.high["supply.positive"], share.laser_voltage("low", share.most.current)
    derivation.compute(
        "R7",
        driver.fail_safe_resistance,
        reason=f"({write(supply, 'V')} - {write(voltage, 'V')}) / {write(share.most.current, 'A')}, Q1 and R1 counted"
        f" as shorted, and {percent(resistor_spread(share.request))} tolerance on top: {share.most.reason}",
        supply=supply,
        forward_voltage=voltage,
        current_limit=share.most.current,
        on_resistance=0.0,
    )


def _sense_voltage(share: Sharing, derivation: Derivation, asked: float, worst: float) -> float:
    """Between what error and common mode ask for and what compliance, heat and reference leave: the geometric mean."""
    request, bench = share.request, share.bench
    if "R1" in request.fixed:
        derivation.note("sense voltage", "by R1, fixed in the design file")
        return asked * request.fixed["R1"]
    left = _largest(lambda sense: min(share.slack(worst, sense)) >= share.margin)
    most = {
        "common practice": SENSE_MOST,
        "compliance": left,
        "heat": CHIP_RESISTORS["2512"].power / 2 / worst,
        "reference": STEER * bench.low("U2.voltage"),
    }
    least = {"common practice": SENSE_LEAST, "error": _for_error(request, bench), "common mode": _common_mode(request)}
    high, low = min(most, key=lambda name: most[name]), max(least, key=lambda name: least[name])
    if least["common mode"] > most[high]:
        raise InfeasibleError(
            f"the op amp's inputs work from {write(least['common mode'], 'V')} off the rail of the sense resistor on,"
            f" {high} leaves {write(most[high], 'V')}",
            ["an amplifier whose common-mode range includes that rail"],
        )
    sense = float(np.sqrt(least[low] * most[high])) if least[low] <= most[high] else most[high]
    derivation.note(
        "sense voltage",
        f"between {write(least[low], 'V')} ({low}) and {write(most[high], 'V')} ({high})",
    )
    return sense


def _largest(does: Callable[[float], bool]) -> float:
    low, high = 0.0, 2 * SENSE_MOST
    for _ in range(40):
        middle = (low + high) / 2
        low, high = (middle, high) if does(middle) else (low, middle)
    return max(low, SENSE_LEAST)


def _for_error(request: LaserDriverRequest, bench: Bench) -> float:
    """Least sense voltage at which the offset stays within the error asked for. [V]"""
    required = request.require.get("current_error")
    if required is None or required.max is None:
        return 0.0
    left = required.max - current_spread(request, bench)
    return offset_error(request, bench) / left if left > 0 else SENSE_MOST


def _common_mode(request: LaserDriverRequest) -> float:
    """Least distance of the op amp's inputs from the rail that they work at; none where the sheet states none. [V]"""
    amplifier = request.amplifier
    low = side_of(request) == "low"
    limit = amplifier.common_mode_to_negative if low else amplifier.common_mode_to_positive
    if limit is None:
        return 0.0
    return limit.high - (abs(request.conditions.supply.negative) if low else 0.0)
