"""Worst load and heat of every part over the lanes of a corner run."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np

from opto_ckt.circuit import Circuit
from opto_ckt.limits import Corner, Values
from opto_ckt.result import FoundHeat


def worst_stresses(circuit: Circuit, biased: Values, request: Any) -> dict[str, dict[str, float]]:
    """Largest power [W], voltage [V] and current [A] of each part over all lanes; zeros are left out."""
    return {
        stress.ref: {
            name: worst
            for name in ("power", "voltage", "current")
            if (worst := float(np.max(np.abs(getattr(stress, name))))) > 0
        }
        for stress in circuit.stresses(biased, request)
    }


def worst_heat(circuit: Circuit, biased: Values, request: Any, corners: Sequence[Corner]) -> tuple[FoundHeat, ...]:
    """Each part at the lane where it comes nearest to its limit."""
    found = []
    for heat in circuit.heat(biased, request):
        temperature = np.broadcast_to(heat.temperature, len(corners))
        power = np.broadcast_to(heat.power, len(corners))
        lane = int(np.argmax(temperature))
        found.append(FoundHeat(heat.ref, float(power[lane]), float(temperature[lane]), heat.limit, corners[lane]))
    return tuple(found)
