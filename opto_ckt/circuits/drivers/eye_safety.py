"""Advice on the light that an eye may meet, beside what Class 1 allows; never a classification."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

from opto_ckt.circuits.drivers import launch
from opto_ckt.formulas.eye_safety import (
    INFRARED,
    LONGEST,
    LOUPE,
    NAKED,
    NARROW,
    PUPIL,
    SHORTEST,
    class_1_limit,
    multimode_spot,
    share_through,
    single_mode_spot,
)
from opto_ckt.limits import Values
from opto_ckt.parts.fibre import FibreData
from opto_ckt.request import LaserRequest
from opto_ckt.units import percent, write

STANDARD = "IEC 60825-1"
NOT_ASSESSED = "pulses, other wavelengths at the same place, large sources, binoculars, skin"


class Seen(NamedTuple):
    """How much of the light an eye takes, and what was assumed for it."""

    share: float
    assumed: str


def advice(values: Values, request: LaserRequest, fault: float) -> tuple[str, ...]:
    """What may reach an eye in normal running and in the worst fault, beside the limit of Class 1.

    Parameters
    ----------
    fault : largest power that a fault leads to, at the plane of the laser's sheet. [W]
    """
    normal = float(np.max(values["D1.power"]))
    wavelength = request.source.wavelength.nominal
    if not SHORTEST <= wavelength <= LONGEST:
        return (f"eye safety: no limits are known here for {write(wavelength, 'm')}; a competent person has to look",)
    seen, carried = _seen(request, wavelength), _carried(request)
    limit = float(class_1_limit(wavelength))
    reaching = [power * carried * seen.share for power in (normal, max(normal, fault))]
    verdicts = ("above it in normal running", "above it in the worst fault", "below it in both")
    verdict = verdicts[0] if reaching[0] > limit else verdicts[1] if reaching[1] > limit else verdicts[2]
    return (
        f"eye safety, advice only: {write(reaching[0], 'W')} may reach an eye, {write(reaching[1], 'W')} in the worst"
        f" fault; {STANDARD} allows Class 1 {write(limit, 'W')} at {write(wavelength, 'm')} (small source, 100 s, the"
        f" stricter of two editions): {verdict}",
        f"assumed for it: {seen.assumed}; not assessed: {NOT_ASSESSED}; the class is for a competent person to find"
        " by the local rules",
    )


def _carried(request: LaserRequest) -> float:
    """Power where the light leaves the equipment over that at the plane of the sheet; from a facet all of it. [1]"""
    ends_in_fibre = request.fibre is not None or request.signal.plane == "fibre"
    if request.source.plane == "fibre" or not ends_in_fibre:
        return 1.0
    if request.source.coupling is not None:
        return request.source.coupling.high
    launched = launch.launched(request)
    return 1.0 if launched is None else launched.high


def _seen(request: LaserRequest, wavelength: float) -> Seen:
    """Share of the light that enters the aperture of the standard behind a magnifier; all of it without [fibre]."""
    fibre = request.fibre
    if fibre is None:
        where = "the fibre's end" if (request.signal.plane or request.source.plane) == "fibre" else "the bare source"
        return Seen(1.0, f"all the light of {where} enters the eye; [fibre] gives its share")
    level_1, level_1m = (write(power, "W") for power in hazard_levels(fibre, wavelength))
    levels = (
        f"; of the fibre's end, hazard level 1 goes up to {level_1} and 1M to {level_1m} (IEC 60825-2, from memory)"
        "; with the fibre out, the laser's own light is met"
    )
    if wavelength >= INFRARED:
        return Seen(1.0, f"all the light of the fibre's end counts beyond {write(INFRARED, 'm')}{levels}")
    share = float(share_through(aperture=PUPIL, spot=_spot(fibre, wavelength, LOUPE)))
    beam = f"{percent(share)} of the light from the fibre's end enters {write(PUPIL, 'm')} at {write(LOUPE, 'm')}"
    return Seen(share, f"{beam}, a Gaussian beam{levels}")


def hazard_levels(fibre: FibreData, wavelength: float) -> tuple[float, float]:
    """Power from a fibre's end up to which it is of hazard level 1, through a magnifier, and 1M, by a bare eye. [W]

    Beyond 1400 nm level 1 takes all the light for met.
    """
    limit = float(class_1_limit(wavelength))
    aperture = PUPIL if wavelength < INFRARED else NARROW
    magnified, bare = (
        float(share_through(aperture=aperture, spot=_spot(fibre, wavelength, distance))) for distance in (LOUPE, NAKED)
    )
    return limit / (magnified if wavelength < INFRARED else 1.0), limit / bare


def _spot(fibre: FibreData, wavelength: float, distance: float) -> float:
    if fibre.mode_field_diameter is not None:
        field = fibre.mode_field_diameter.high
        return float(single_mode_spot(distance=distance, wavelength=wavelength, mode_field_diameter=field))
    aperture = 0.0 if fibre.numerical_aperture is None else fibre.numerical_aperture.low
    return float(multimode_spot(distance=distance, numerical_aperture=aperture))
