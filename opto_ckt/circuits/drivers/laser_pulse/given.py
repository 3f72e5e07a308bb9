"""Limits of the pulse driver that no sheet states as they stand here, and what its request asks that it does not do."""

from __future__ import annotations

from opto_ckt.circuit import Refusal
from opto_ckt.circuits.drivers.laser import laser_limits
from opto_ckt.limits import Limit
from opto_ckt.request import LaserPulseRequest
from opto_ckt.topology import SHORT

UNSTATED = 0.2  #: spread of an inductance given as typ only; common practice, for no sheet tells it [1]

READ = frozenset(
    {"Q1.threshold_voltage", "Q1.on_resistance", "Q1.gate_charge", "Q1.junction_to_ambient", "Q1.junction_to_case"}
    | {"U1.high", "U1.source_resistance"}
)
"""Figures of switch and gate driver that a figure depends on; the others are held at nominal."""


def given(request: LaserPulseRequest) -> dict[str, Limit]:
    """The laser's curves, the inductance and resistance of the loop, the rate; what nothing depends on held still."""
    found = laser_limits(request)
    sheets = {"Q1": "transistor", "U1": "logic_output", "D2": "diode"}
    for ref, table in sheets.items():
        for name, limit in request.limits(table).items():
            if f"{ref}.{name}" not in READ:
                found[f"{ref}.{name}"] = Limit(limit.nominal, limit.nominal, limit.nominal)
    rate, resistance = request.signal.repetition_rate, max(request.conditions.layout_resistance, SHORT)
    return {
        **found,
        "LS": inductance(request),
        "LS.resistance": Limit(resistance, resistance, resistance),
        "signal.repetition_rate": Limit(rate.nominal, rate.low, rate.high),
    }


def inductance(request: LaserPulseRequest) -> Limit:
    """Of the whole loop: packages of laser and transistor, and the layout. [H]"""
    parts = budget(request).values()
    return Limit(
        sum(part.nominal for part in parts),
        sum(part.low for part in parts),
        sum(part.high for part in parts),
        assumed=any(part.assumed for part in parts),
    )


def budget(request: LaserPulseRequest) -> dict[str, Limit]:
    """Inductances in the loop by what has them; one given as typ only spreads. [H]"""
    stated = {
        "laser": request.source.inductance,
        "transistor": request.transistor.inductance,
        "layout": request.conditions.layout_inductance,
    }
    found = {}
    for name, spread in stated.items():
        if spread is None:
            continue
        alone = spread.min is None and spread.max is None
        low, high = (1 - UNSTATED, 1 + UNSTATED) if alone else (1.0, 1.0)
        found[name] = Limit(spread.nominal, spread.low * low, spread.high * high, assumed=alone)
    return found


def refused(request: LaserPulseRequest) -> tuple[Refusal, ...]:
    """A switch that does not pull to ground."""
    if request.transistor.kind != "nmos":
        return (
            Refusal(
                ("transistor", "kind"), f"{request.transistor.kind} does not switch the laser to ground; nmos does"
            ),
        )
    return ()
