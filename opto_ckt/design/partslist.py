"""The parts of a sized circuit, each with its value, its reason, and what it must stand."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

import numpy as np

from opto_ckt.analyses.thermal import worst_stresses
from opto_ckt.choice import Choice
from opto_ckt.circuit import Fitted
from opto_ckt.derivation import Derivation
from opto_ckt.design.model import Model
from opto_ckt.limits import Limits, Tolerance, Values
from opto_ckt.preferred import (
    CHIP_RESISTORS,
    CLASS_1_VOLTAGE_FACTOR,
    CLASS_2_VOLTAGE_FACTOR,
    DIELECTRICS,
    chip_for,
    derated_power,
    voltage_rating_above,
)
from opto_ckt.result import FoundPart
from opto_ckt.topology import Capacitor, Element, Resistor
from opto_ckt.units import percent, write

UNITS: Mapping[str, str] = {"resistor": "Ω", "trimmer": "Ω", "capacitor": "F", "inductor": "H"}
HALF_RATING = 2.0  #: rating over worst dissipation of a resistor; common practice


def parts_list(
    model: Model, fitted: Sequence[Fitted], choice: Choice, derivation: Derivation, limits: Limits, biased: Values
) -> tuple[FoundPart, ...]:
    """Every part that the topology fits, in the order in which it names them."""
    stresses = worst_stresses(model.circuit, biased, model.request)
    hottest = float(np.max(biased["temperature"]))
    exact = {part.ref: part.exact for part in fitted}
    found = []
    for element in model.topology.fitted:
        stress = stresses.get(element.ref, {})
        if element.ref in exact:
            value = choice.values[element.ref]
            found.append(_chosen(element, exact[element.ref], value, derivation, limits, stress, hottest, model))
        else:
            found.append(_bought(element, stress, model))
    return tuple(found)


def _bought(element: Element, stress: Mapping[str, float], model: Model) -> FoundPart:
    record = getattr(model.request, element.table, None)
    name = "" if record is None else record.part
    return FoundPart(
        ref=element.ref, kind=element.kind, role=element.role, unit="", exact=None, value=None, tolerance=None,
        absolute_tolerance=None, characteristic="", size="", part=name, stress=stress, required_rating=dict(stress),
        formula="named in the design file" if name else "figures in the design file", source="",
    )  # fmt: skip


def _chosen(
    element: Element,
    exact: float,
    value: float,
    derivation: Derivation,
    limits: Limits,
    stress: Mapping[str, float],
    hottest: float,
    model: Model,
) -> FoundPart:
    stock = getattr(model.request.preferred, element.chosen_from)
    step = derivation.of(element.ref)
    reason = derivation.reasons.get(element.ref, step.reason if step else "")
    limit = limits.get(element.ref)
    small = isinstance(limit, Tolerance) and 0 < value < limit.absolute_below
    rating, size = _rating(element, stress, hottest, stock)
    return FoundPart(
        ref=element.ref,
        kind=element.kind,
        role=element.role,
        unit=UNITS[element.kind],
        exact=exact,
        value=value,
        tolerance=None if small else stock.tolerance,
        absolute_tolerance=limit.absolute if small and isinstance(limit, Tolerance) else None,
        characteristic=_characteristic(element, stock),
        size=size,
        part="",
        stress=stress,
        required_rating=rating,
        formula=f"{step.equation}: {reason}" if step and reason else reason or (step.equation if step else ""),
        source=step.source if step else "",
        fitted=value > 0,
    )


def _characteristic(element: Element, stock: object) -> str:
    dielectric = getattr(stock, "dielectric", "")
    if dielectric:
        return str(dielectric)
    coefficient = getattr(stock, "temperature_coefficient", None)
    return write(coefficient, "1/K", trim=True) if coefficient is not None else ""


def _rating(
    element: Element, stress: Mapping[str, float], hottest: float, stock: object
) -> tuple[dict[str, float], str]:
    """Rating that the part must have, and the smallest size, from the preferred one up, that has it."""
    size = str(getattr(stock, "size", ""))
    if isinstance(element, Resistor):
        power, voltage = stress.get("power", 0.0), stress.get("voltage", 0.0)
        name = chip_for(power, voltage, hottest, size)
        chip = CHIP_RESISTORS[name or list(CHIP_RESISTORS)[-1]]
        share = derated_power(1.0, hottest, chip.knee_temperature, chip.zero_power_temperature)
        return {"power": HALF_RATING * power / max(share, 1e-9), "voltage": voltage}, name or "larger than 2512"
    if isinstance(element, Capacitor):
        factor = CLASS_1_VOLTAGE_FACTOR
        if DIELECTRICS[str(getattr(stock, "dielectric", "C0G"))].class_number == 2:
            factor = CLASS_2_VOLTAGE_FACTOR
        rating = voltage_rating_above(stress.get("voltage", 0.0), factor)
        return ({"voltage": rating} if rating else {}), size
    return dict(stress), size


def too_small(parts: Sequence[FoundPart], model: Model) -> tuple[str, ...]:
    """A sentence for every resistor that has to be larger than the preferred size."""
    size = model.request.preferred.resistors.size
    return tuple(
        f"{part.ref} needs size {part.size}, not {size}: {write(part.stress['power'], 'W')} at the hottest corner"
        f" asks for a rating of {write(part.required_rating['power'], 'W')} at {percent(1 / HALF_RATING)} load"
        for part in parts
        if part.kind == "resistor" and part.size != size
    )
