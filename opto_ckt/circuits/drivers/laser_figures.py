"""Figures that every laser driver with a steady current offers: distance from runaway, wavelength, cooler."""

from __future__ import annotations

from functools import cached_property

import numpy as np

from opto_ckt.analyses.network import Evaluation
from opto_ckt.circuits.drivers import runaway
from opto_ckt.constants import ROOM_TEMPERATURE
from opto_ckt.formulas import cooling
from opto_ckt.limits import Lanes, Values
from opto_ckt.request import LaserDriverRequest


class LaserFigures:
    """Each figure as a property, computed when it is first asked for; nan where it has no meaning for the request."""

    def __init__(self, values: Values, evaluation: Evaluation, request: LaserDriverRequest) -> None:
        self._values, self._evaluation, self._request = values, evaluation, request

    @cached_property
    def runaway_margin(self) -> Lanes:
        """Of the temperature of the design, air or case, at the light that there is. [K]"""
        return runaway.margin(self._values, self._request)

    @cached_property
    def wavelength_shift(self) -> Lanes:
        """From that at a junction of 25 °C; nan where the sheet states no coefficient. [m]"""
        junction = np.asarray(self._values["D1.junction_temperature"])
        coefficient = self._request.source.wavelength_temperature
        if coefficient is None:
            return np.full_like(junction, np.nan)
        return np.asarray(
            cooling.wavelength_shift(
                coefficient=coefficient, junction_temperature=junction, reference_temperature=ROOM_TEMPERATURE
            )
        )

    @cached_property
    def cooler_load(self) -> Lanes:
        """Out of a case that is held at a temperature in air of another; nan where none is. [W]"""
        return cooler_load(self._values, self._request)


def cooler_load(values: Values, request: LaserDriverRequest) -> Lanes:
    """Heat of the laser, and what comes in from the air; nan where no case is held. [W]"""
    heat = np.asarray(values["D1.heat"])
    if request.conditions.air is None:
        return np.full_like(heat, np.nan)
    return np.asarray(
        cooling.cooler_load(
            power=heat,
            air_temperature=values["temperature.air"],
            case_temperature=values["temperature"],
            case_to_air=request.conditions.sink_resistance,
        )
    )


def offered(figures: type[LaserFigures]) -> tuple[str, ...]:
    """Names of all figures of a class, those of its bases too."""
    return tuple(
        dict.fromkeys(
            name
            for kind in reversed(figures.__mro__)
            for name, entry in vars(kind).items()
            if isinstance(entry, cached_property)
        )
    )
