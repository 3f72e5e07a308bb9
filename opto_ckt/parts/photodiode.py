"""Data of a photodiode, plain or avalanche, and what it does at a wavelength, a bias and a temperature."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Annotated, Any, ClassVar

import numpy as np

from opto_ckt.constants import ROOM_TEMPERATURE
from opto_ckt.formulas.formula import Real
from opto_ckt.formulas.leakage import dark_current as dark_current_law
from opto_ckt.formulas.photodiode import MATERIALS, cutoff_wavelength, junction_capacitance
from opto_ckt.parts.curve import between
from opto_ckt.parts.record import Assumed, Check, Choice, Finding, Points, Record, Sheet, Spread, Table, Text, Unit
from opto_ckt.units import write

BIAS = Unit("V", "5 V", "not negative")
CAPACITANCE = Unit("F", "1.5 pF")


class WavelengthError(ValueError):
    """The detector does not see the wavelength, or the sheet does not say how well."""


class ResponsivityPoint(Table):
    """Responsivity at one wavelength."""

    wavelength: Annotated[float, Unit("m", "1310 nm")]
    responsivity: Annotated[Spread, Unit("A/W", "0.9 A/W")]


class CapacitancePoint(Table):
    """Capacitance at one reverse bias."""

    bias: Annotated[float, BIAS]
    capacitance: Annotated[Spread, CAPACITANCE]


class GainPoint(Table):
    """Avalanche gain at one reverse bias."""

    bias: Annotated[float, Unit("V", "45 V")]
    gain: Annotated[Spread, Unit("1", "10")]


def _material_known(material: str, cutoff: float | None) -> Iterator[Finding]:
    if material == "other" and cutoff is None:
        yield Finding(("material",), "'other' needs cutoff_wavelength beside it")
    elif material != "other" and material not in MATERIALS:
        yield Finding(
            ("material",),
            f"'{material}' is not known; allowed are {', '.join(MATERIALS)}, or other with cutoff_wavelength",
        )


def _one_wavelength(responsivity: Any, wavelength: float | None) -> Iterator[Finding]:
    if isinstance(responsivity, Spread) and wavelength is None:
        yield Finding(
            ("responsivity",), "needs responsivity_wavelength beside it, or a list of { wavelength, responsivity }"
        )
    elif not isinstance(responsivity, Spread) and wavelength is not None:
        yield Finding(
            ("responsivity_wavelength",), "is not wanted where each point of responsivity has its own wavelength"
        )


def _below_limit(key: str) -> Any:
    def find(bias: float | None, limit: float) -> Iterator[Finding]:
        if bias is not None and bias > limit:
            yield Finding((key,), f"{write(bias, 'V')} is above reverse_voltage_max {write(limit, 'V')}")

    return find


class PhotodiodeData(Record):
    """Photodiode; figures hold at 25 °C. An avalanche photodiode has gain_points, or gain at gain_bias, as well."""

    section: ClassVar[str] = "photodiode"

    material: Annotated[Text, Sheet("detector material")]
    responsivity: Annotated[
        Spread | tuple[ResponsivityPoint, ...], Unit("A/W", "0.9 A/W"), Points(1), Assumed(0.1, 0.1),
        Sheet("responsivity, photo sensitivity, S, R"),
    ]  # fmt: skip
    responsivity_wavelength: Annotated[float | None, Unit("m", "1310 nm"), Sheet("at λ =, peak wavelength")] = None
    capacitance: Annotated[
        Spread | None, CAPACITANCE, Assumed(0.2, 0.2), Sheet("terminal or junction capacitance, Ct, Cj")
    ] = None
    capacitance_bias: Annotated[float | None, BIAS, Sheet("at VR =")] = None
    capacitance_points: Annotated[
        tuple[CapacitancePoint, ...] | None, Points(1), Sheet("curve of capacitance against reverse voltage")
    ] = None
    zero_bias_capacitance: Annotated[
        Spread | None, Unit("F", "4 pF"), Assumed(0.2, 0.2), Sheet("capacitance at VR = 0, Cj0")
    ] = None
    built_in_voltage: Annotated[float, Unit("V", "0.6 V"), Sheet("built-in voltage, VJ of a model")] = 0.6
    grading: Annotated[float, Unit("1", "0.5"), Sheet("grading coefficient, M of a model")] = 0.5
    dark_current: Annotated[Spread, Unit("A", "1 nA", "not negative"), Assumed(0.0, 4.0), Sheet("dark current, Id, IR")]
    dark_current_bias: Annotated[float | None, BIAS, Sheet("at VR =")] = None
    dark_current_doubling: Annotated[float, Unit("K", "10 K"), Sheet("temperature for twice the dark current")] = 10.0
    shunt_resistance: Annotated[Spread | None, Unit("Ω", "1 GΩ"), Assumed(0.5, 1.0), Sheet("shunt resistance, Rsh")] = (
        None
    )
    series_resistance: Annotated[
        Spread | None, Unit("Ω", "10 Ω"), Assumed(0.3, 0.3), Sheet("series resistance, Rs")
    ] = None
    transit_frequency: Annotated[
        Spread | None, Unit("Hz", "2 GHz"), Assumed(0.2, 0.2), Sheet("cut-off frequency, bandwidth, fc, into 50 Ω")
    ] = None
    rise_time: Annotated[Spread | None, Unit("s", "0.2 ns"), Assumed(0.2, 0.2), Sheet("rise time, tr, into 50 Ω")] = (
        None
    )
    area: Annotated[float | None, Unit("m²", "0.005 mm²"), Sheet("active area")] = None
    reverse_voltage_max: Annotated[float, Unit("V", "20 V"), Sheet("absolute maximum reverse voltage")]
    cutoff_wavelength: Annotated[float | None, Unit("m", "1700 nm"), Sheet("spectral response range, its long end")] = (
        None
    )

    responsivity_gain: Annotated[float, Unit("1", "1"), Sheet("M at which responsivity is given")] = 1.0
    gain: Annotated[Spread | None, Unit("1", "10"), Assumed(0.2, 0.2), Sheet("multiplication, gain, M")] = None
    gain_bias: Annotated[float | None, Unit("V", "45 V"), Sheet("at VR =")] = None
    gain_points: Annotated[tuple[GainPoint, ...] | None, Points(2), Sheet("curve of gain against reverse voltage")] = (
        None
    )
    gain_temperature: Annotated[float, Unit("°C", "25 °C", "any"), Sheet("temperature of the gain curve")] = (
        ROOM_TEMPERATURE
    )
    ionisation_ratio: Annotated[float | None, Unit("1", "0.02"), Sheet("ionisation ratio, k")] = None
    excess_noise_exponent: Annotated[float | None, Unit("1", "0.3"), Sheet("excess noise index, x in M^x")] = None
    multiplied_dark_current: Annotated[
        Spread | None, Unit("A", "0.1 nA", "not negative"), Assumed(0.0, 4.0), Sheet("bulk dark current at M = 1")
    ] = None
    surface_dark_current: Annotated[
        Spread | None, Unit("A", "1 nA", "not negative"), Assumed(0.0, 4.0), Sheet("surface leakage, not multiplied")
    ] = None
    breakdown_voltage: Annotated[
        Spread | None, Unit("V", "55 V"), Assumed(0.1, 0.1), Sheet("breakdown voltage, VBR")
    ] = None
    breakdown_temperature: Annotated[Spread | None, Unit("V/K", "0.1 V/K"), Sheet("temperature coefficient of VBR")] = (
        None
    )
    gain_bandwidth_product: Annotated[
        Spread | None, Unit("Hz", "100 GHz"), Assumed(0.2, 0.2), Sheet("gain-bandwidth product")
    ] = None
    photocurrent_max: Annotated[float | None, Unit("A", "2 mA"), Sheet("absolute maximum forward or photo current")] = (
        None
    )

    choices = (
        Choice(
            "the capacitance",
            (("capacitance", "capacitance_bias"), ("capacitance_points",), ("zero_bias_capacitance",)),
        ),
        Choice("the speed", (("transit_frequency",), ("rise_time",)), needed=False),
        Choice("the avalanche gain", (("gain", "gain_bias"), ("gain_points",)), needed=False),
        Choice("the excess noise", (("ionisation_ratio",), ("excess_noise_exponent",)), needed=False),
    )
    checks: ClassVar[tuple[Check, ...]] = (
        Check(("material", "cutoff_wavelength"), _material_known),
        Check(("responsivity", "responsivity_wavelength"), _one_wavelength),
        Check(("capacitance_bias", "reverse_voltage_max"), _below_limit("capacitance_bias")),
        Check(("dark_current_bias", "reverse_voltage_max"), _below_limit("dark_current_bias")),
    )

    @property
    def cutoff(self) -> float:
        """Longest wavelength that the detector sees: the sheet's own figure, else that of the material. [m]"""
        if self.cutoff_wavelength is not None:
            return self.cutoff_wavelength
        return float(cutoff_wavelength(band_gap=MATERIALS[self.material].band_gap))

    def responsivity_spread(self, wavelength: float) -> Spread:
        """Responsivity and its limits at a wavelength [m], in A/W.

        Between listed points linear in the wavelength. From one figure, or beyond the listed points, in proportion to
        the wavelength (constant quantum efficiency, common practice), up to the cut-off. `WavelengthError` beyond it.
        """
        points = self.responsivity
        if isinstance(points, Spread):
            known = {self.responsivity_wavelength or wavelength: points}
        else:
            known = {point.wavelength: point.responsivity for point in points}
        shortest, longest = min(known), max(known)
        if wavelength > longest and wavelength > self.cutoff:
            raise WavelengthError(
                f"{write(wavelength, 'm', digits=4)} is beyond the cut-off of {self.material},"
                f" {write(self.cutoff, 'm', digits=4)}, and the sheet gives no responsivity there"
            )
        if not shortest <= wavelength <= longest:
            nearest = min(max(wavelength, shortest), longest)
            return known[nearest].scaled(wavelength / nearest)
        if wavelength in known:
            return known[wavelength]
        spreads = list(known.values())
        low, typ, high = (
            float(between(wavelength, at=list(known), values=[getattr(spread, side) for spread in spreads]))
            for side in ("low", "nominal", "high")
        )
        stated = all(spread.stated for spread in spreads)
        return Spread(min=min(low, typ), typ=typ, max=max(typ, high)) if stated else Spread(typ=typ)

    def responsivity_at(self, wavelength: float) -> float:
        """Nominal responsivity at a wavelength [m], in A/W; see `responsivity_spread`."""
        return self.responsivity_spread(wavelength).nominal

    @property
    def capacitance_figure(self) -> Spread:
        """The capacitance whose limits stand for those of the whole curve: that of the highest bias that is listed."""
        if self.capacitance_points is not None:
            return self.capacitance_points[-1].capacitance
        figure = self.capacitance or self.zero_bias_capacitance
        if figure is None:
            raise ValueError("the record states no capacitance")
        return figure

    def capacitance_at(self, reverse_bias: Real, capacitance: Real | None = None) -> Any:
        """Capacitance at a reverse bias [V], in F; `capacitance` puts another value in place of `capacitance_figure`.

        Listed points: linear in log C against log(1 + V/V_bi), the value of the end point beyond either end.
        One point: the junction law down to zero bias below it, the listed value above it. Zero-bias form: the junction
        law.
        """
        bias = np.maximum(np.asarray(reverse_bias, dtype=float), 0.0)
        factor = 1.0 if capacitance is None else np.asarray(capacitance) / self.capacitance_figure.nominal
        if self.capacitance_points is not None:
            return factor * np.exp(
                between(
                    np.log1p(bias / self.built_in_voltage),
                    at=[float(np.log1p(point.bias / self.built_in_voltage)) for point in self.capacitance_points],
                    values=[float(np.log(point.capacitance.nominal)) for point in self.capacitance_points],
                )
            )
        listed = self.capacitance_bias if self.capacitance is not None and self.capacitance_bias is not None else 0.0
        law = junction_capacitance(
            zero_bias_capacitance=self.capacitance_figure.nominal,
            reverse_bias=bias if self.capacitance is None else np.minimum(bias, listed),
            built_in_voltage=self.built_in_voltage,
            grading=self.grading,
        )
        return factor * law * (1 + listed / self.built_in_voltage) ** self.grading

    def dark_current_at(self, temperature: Real, dark_current: Real | None = None) -> Any:
        """Dark current [A] at a temperature [K]; `dark_current` is another one at 25 °C than the nominal one."""
        return dark_current_law(
            dark_current=self.dark_current.nominal if dark_current is None else dark_current,
            temperature=temperature,
            reference_temperature=ROOM_TEMPERATURE,
            doubling=self.dark_current_doubling,
        )
