"""What a designer ought to be told about a sized constant-current laser driver, people's eyes first."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuits.drivers import intensity
from opto_ckt.circuits.drivers.cautions import about_the_driver
from opto_ckt.circuits.drivers.laser_current.figures import noise_frequency
from opto_ckt.circuits.drivers.laser_figures import cooler_load
from opto_ckt.circuits.drivers.side import side_of
from opto_ckt.constants import ROOM_TEMPERATURE
from opto_ckt.formulas.bands import band_of
from opto_ckt.formulas.cooling import wavelength_shift
from opto_ckt.limits import Limits, Values
from opto_ckt.request import LaserDriverRequest
from opto_ckt.units import write


def remarks(values: Values, limits: Limits, request: LaserDriverRequest) -> tuple[str, ...]:
    """Cautions for people and laser, then advice that depends on the values."""
    found = about_the_driver(values, request, float(np.max(values["D1.power"])))
    found.append(_noise(values, request))
    found += _cooler(values, request)
    found += _wavelength(values, request)
    rail = "negative" if side_of(request) == "low" else "positive"
    if getattr(request.amplifier, f"common_mode_to_{rail}") is None:
        found.append(f"the amplifier's sheet says nothing of inputs near its {rail} rail: see that they work there")
    if request.signal.power is not None:
        found.append("the power is not trimmed: its span holds the spread of the laser; trim R2, or control the power")
    return tuple(found)


def _noise(values: Values, request: LaserDriverRequest) -> str:
    """Noise of the current by hand, and what the light's noise is mostly made of."""
    frequency = noise_frequency(request)
    density = intensity.estimated_current_noise(values, frequency)
    kinds = {
        "the driver's": intensity.driver_noise(density, values),
        "the laser's own": intensity.laser_noise(values),
        "that of the photons": intensity.shot_floor(values, request),
    }
    own = "" if "D1.rin" in values else "; the laser's sheet states none of its own"
    return (
        f"current noise of the loop up to {write(float(np.max(density)), 'A/√Hz')} at {write(frequency, 'Hz')}, the"
        f" reference's apart; of the light's noise there {intensity.greatest(kinds)} is the greatest at nominal{own}"
    )


def _cooler(values: Values, request: LaserDriverRequest) -> list[str]:
    """What a cooler has to do, where the laser's case is held at a temperature."""
    air = request.conditions.air
    if air is None:
        return []
    load, case = cooler_load(values, request), request.conditions.temperature
    most, least = float(np.max(load)), float(np.min(load))
    across = air.high - case.low
    text = f"the laser's case is held by a cooler: it moves up to {write(most, 'W')} out"
    text += f" against up to {write(across, 'K')}" if across > 0 else ""
    text += f", and {write(-least, 'W')} in when the air is cold" if least < 0 else ""
    return [
        f"{text}; its own heat comes on top on the warm side, and what a"
        " stopped cooler does is not among the faults; drift and noise of the driver are reckoned at the case's"
        " temperature, junctions of Q1 and U1 in the air"
    ]


def _wavelength(values: Values, request: LaserDriverRequest) -> list[str]:
    """Where the light may lie over the range, with the band's name."""
    source = request.source
    if source.wavelength_temperature is None:
        return []
    shift = wavelength_shift(
        coefficient=source.wavelength_temperature,
        junction_temperature=np.asarray(values["D1.junction_temperature"]),
        reference_temperature=ROOM_TEMPERATURE,
    )
    ends = (source.wavelength.low + float(np.min(shift)), source.wavelength.high + float(np.max(shift)))
    bands = {band_of(end) for end in ends}
    place = f", {bands.pop()} band" if len(bands) == 1 and "" not in bands else ""
    return [f"the light lies from {write(ends[0], 'm', 4)} to {write(ends[1], 'm', 4)} over the range{place}"]
