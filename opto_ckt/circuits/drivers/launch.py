"""Light of a laser's facet in the fibre that its design names, where the sheet states no coupling."""

from __future__ import annotations

from itertools import product
from math import cos, prod, radians, sqrt

from opto_ckt.formulas.launch import (
    fresnel_reflection,
    lobe_coupling,
    lobe_exponent,
    mismatch_coupling,
    offset_coupling,
    waist_of_divergence,
)
from opto_ckt.limits import Limit
from opto_ckt.parts.fibre import FibreData
from opto_ckt.request import LaserRequest
from opto_ckt.units import percent

GLASS = 1.46  #: index of a fibre's core, silica; from memory
ASIDE = 1e-6  #: that a single-mode fibre is fixed off the axis at the worst; from memory [m]
PRACTICE = 0.1  #: that reaches a single-mode fibre butt against a laser; B. Wheeler, Laser Focus World, May 1999


def launched(request: LaserRequest) -> Limit | None:
    """Share of the facet's light in the fibre, butt against it without a lens; None where it is stated or not asked."""
    data, fibre = request.source, request.fibre
    stated = data.plane == "fibre" or data.coupling is not None
    if stated or fibre is None or data.divergence_parallel is None:
        return None
    limits = request.limits("source")
    widths = [limits[f"divergence_{name}"] for name in ("parallel", "perpendicular")]
    ends = [(radians(width.low), radians(width.high)) for width in widths]
    middle = (radians(widths[0].nominal), radians(widths[1].nominal))
    entering = 1 - float(fresnel_reflection(index=GLASS, other=1.0))
    if fibre.mode_field_diameter is None:
        return _multimode(fibre, ends, middle, entering)
    wavelength, fields = data.wavelength.nominal, fibre.mode_field_diameter
    corners = [
        ((parallel, perpendicular), field / 2)
        for parallel, perpendicular in product(*ends)
        for field in (fields.low, fields.high)
    ]
    nominal = _single_mode(wavelength, middle, fields.nominal / 2, 0.0)
    return Limit(
        entering * nominal,
        min(PRACTICE, *(entering * _single_mode(wavelength, pair, field, ASIDE) for pair, field in corners)),
        entering * max(nominal, *(_single_mode(wavelength, pair, field, 0.0) for pair, field in corners)),
        assumed=True,
    )


def advice(request: LaserRequest) -> tuple[str, ...]:
    """What the power in the fibre rests on."""
    limit = launched(request)
    if limit is None or request.signal.plane != "fibre":
        return ()
    single = request.fibre is not None and request.fibre.mode_field_diameter is not None
    off = f", at the least the {percent(PRACTICE)} of published practice" if single else ""
    return (
        f"{percent(limit.nominal)} of the facet's light is reckoned to enter the fibre, {percent(limit.low)} to"
        f" {percent(limit.high)}: cut square, against the facet without a lens{off}; gap, tilt and the laser's"
        " spreads between types are not in it",
    )


def _single_mode(wavelength: float, divergences: tuple[float, float], field: float, aside: float) -> float:
    """Overlap of the laser's mode and the fibre's, set off to the side in which that hurts the more."""
    waists = [float(waist_of_divergence(wavelength=wavelength, divergence=width)) for width in divergences]
    overlap = prod(float(mismatch_coupling(mode_radius=waist, other_radius=field)) for waist in waists)
    between = sqrt((min(waists) ** 2 + field**2) / 2)
    return overlap * float(offset_coupling(offset=aside, mode_radius=between))


def _multimode(
    fibre: FibreData, ends: list[tuple[float, float]], middle: tuple[float, float], entering: float
) -> Limit:
    """The beam's cone within the fibre's: its broad side at the least, its narrow side at the most, else their mean."""
    aperture = fibre.numerical_aperture
    if aperture is None:
        raise ValueError("the record states neither mode field nor aperture")

    def within(numerical_aperture: float, width: float) -> float:
        exponent = lobe_exponent(cosine=cos(width / 2))
        return entering * float(lobe_coupling(numerical_aperture=numerical_aperture, exponent=exponent))

    return Limit(
        sum(within(aperture.nominal, width) for width in middle) / 2,
        within(aperture.low, max(high for _, high in ends)),
        within(aperture.high, min(low for low, _ in ends)),
        assumed=True,
    )
