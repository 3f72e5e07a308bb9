"""The parts of a result that are gathered rather than computed: heading, noise table, assumptions, cautions."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

import numpy as np

from opto_ckt.analyses import noise
from opto_ckt.choice import Choice
from opto_ckt.circuit import Circuit
from opto_ckt.design.model import Model
from opto_ckt.design.partslist import too_small
from opto_ckt.design.reading import ReadDesign
from opto_ckt.limits import Limit, Limits, Values
from opto_ckt.result import DesignHead, FoundFault, FoundHeat, FoundNoise, FoundPart
from opto_ckt.units import percent, write

NEGLIGIBLE = 1e-4  #: share of the noise power below which a generator is left out


def head(read: ReadDesign, circuit: Circuit) -> DesignHead:
    """What the design file says of itself."""
    request = read.request
    return DesignHead(request.title, request.revision, circuit.name, circuit.title, read.digest, read.stem)


def noise_table(model: Model, biased: Mapping[str, float]) -> tuple[FoundNoise, ...]:
    """Output noise by generator in the noise band at nominal, largest first."""
    rms = noise.rms_by_generator(model.evaluation(biased), model.circuit.noise_band(model.request))
    powers = {label: float(np.asarray(value).reshape(-1)[0]) ** 2 for label, value in rms.items()}
    total = sum(powers.values())
    ordered = sorted(powers.items(), key=lambda entry: -entry[1])
    return tuple(
        FoundNoise(label, power**0.5, power / total) for label, power in ordered if total and power / total > NEGLIGIBLE
    )


def assumed_spreads(limits: Limits) -> tuple[str, ...]:
    """One entry a spread that no sheet states."""
    return tuple(
        f"{name.replace('.', ' ').replace('_', ' ')} {_spread(limit)}"
        for name, limit in limits.items()
        if isinstance(limit, Limit) and limit.assumed and limit.nominal
    )


def _spread(limit: Limit) -> str:
    down, up = 1 - limit.low / limit.nominal, limit.high / limit.nominal - 1
    if abs(down - up) < 1e-9:
        return f"±{percent(up)}"
    return " ".join(f"{sign}{percent(share)}" for sign, share in (("-", down), ("+", up)) if share)


def cautions(
    model: Model,
    biased: Values,
    limits: Limits,
    parts: Sequence[FoundPart],
    heat: Sequence[FoundHeat],
    choice: Choice,
    faults: Sequence[FoundFault],
) -> tuple[str, ...]:
    """Advice of the circuit, parts too hot or too small, and what the chooser could not do."""
    hot = tuple(
        f"{row.ref} reaches {write(row.temperature, '°C')}, above its {write(row.limit, '°C')}"
        for row in heat
        if not row.ok
    )
    remarks: Any = model.circuit.remarks(biased, limits, model.request)
    worst = max((fault.light for fault in faults), default=0.0)
    advice = model.circuit.eye_safety(biased, model.request, worst)
    return (*hot, *too_small(parts, model), *choice.notes, *advice, *remarks)
