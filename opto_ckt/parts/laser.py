"""Data of a laser diode, edge emitter or surface emitter, with or without its monitor diode."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from types import MappingProxyType
from typing import Annotated, Any, ClassVar, Literal

import numpy as np

from opto_ckt.constants import ROOM_TEMPERATURE
from opto_ckt.formulas.formula import Real
from opto_ckt.formulas.laser import forward_voltage
from opto_ckt.formulas.laser_temperature import exponential_slope, linear_slope, threshold_current, vcsel_threshold
from opto_ckt.parts.curve import along
from opto_ckt.parts.forward import ForwardPoint, voltage_through
from opto_ckt.parts.record import Assumed, Choice, Coefficient, EitherUnit, Points, Record, Sheet, Spread, Table, Unit

Common = Literal[
    "none",
    "laser cathode with monitor anode",
    "laser anode with monitor cathode",
    "laser cathode with monitor cathode",
    "laser anode with monitor anode",
]


class ThresholdPoint(Table):
    """Threshold current at one temperature."""

    temperature: Annotated[float, Unit("°C", "25 °C", "any")]
    current: Annotated[Spread, Unit("A", "12 mA")]


class LaserData(Record):
    """Laser diode; figures hold at 25 °C, powers and slope at `plane`."""

    section: ClassVar[str] = "laser"

    wavelength: Annotated[Spread, Unit("m", "1310 nm"), Sheet("peak or centre wavelength, λ")]
    spectral_width: Annotated[Spread | None, Unit("m", "2 nm"), Sheet("spectral width, FWHM or rms, Δλ")] = None
    wavelength_temperature: Annotated[float | None, Unit("m/K", "0.1 nm/K", "any"), Sheet("dλ/dT")] = None
    plane: Annotated[Literal["facet", "fibre"], Sheet("output power from chip or from fibre pigtail")]
    coupling: Annotated[Spread | None, Unit("1", "40 %"), Sheet("coupling efficiency, facet to fibre")] = None
    divergence_parallel: Annotated[
        Spread | None, Unit("°", "10°"), Assumed(0.2, 0.2), Sheet("beam divergence, FWHM, parallel, θ∥")
    ] = None
    divergence_perpendicular: Annotated[
        Spread | None, Unit("°", "30°"), Assumed(0.2, 0.2), Sheet("beam divergence, FWHM, perpendicular, θ⊥")
    ] = None
    threshold_current: Annotated[
        Spread | None, Unit("A", "12 mA"), Assumed(0.3, 0.5), Sheet("threshold current, Ith")
    ] = None
    characteristic_temperature: Annotated[float | None, Unit("K", "60 K"), Sheet("T0")] = None
    threshold_points: Annotated[
        tuple[ThresholdPoint, ...] | None, Points(2), Sheet("curve of threshold against temperature")
    ] = None
    threshold_minimum: Annotated[
        Spread | None, Unit("A", "1.5 mA"), Assumed(0.3, 0.5), Sheet("surface emitter: least threshold current")
    ] = None
    threshold_minimum_temperature: Annotated[
        float | None, Unit("°C", "20 °C", "any"), Sheet("temperature of the least threshold current")
    ] = None
    threshold_curvature: Annotated[
        float | None, Unit("1/K²", "1.1e-4 1/K²", "not negative"), Sheet("threshold curvature")
    ] = None
    slope_efficiency: Annotated[
        Spread, Unit("W/A", "0.08 W/A"), Assumed(0.3, 0.3), Sheet("slope efficiency, η, SE, dP/dI")
    ]
    slope_temperature: Annotated[
        Coefficient | None,
        EitherUnit(Unit("K", "200 K"), Unit("1/K", "-0.4 %/K", "any")),
        Sheet("T1, or temperature coefficient of the slope"),
    ] = None
    turn_on_voltage: Annotated[Spread | None, Unit("V", "0.9 V"), Assumed(0.1, 0.1), Sheet("knee of the V-I curve")] = (
        None
    )
    series_resistance: Annotated[
        Spread | None,
        Unit("Ω", "5 Ω", "not negative"),
        Assumed(0.3, 0.3),
        Sheet("series or differential resistance, Rs, Rd"),
    ] = None
    forward: Annotated[tuple[ForwardPoint, ...] | None, Points(1), Sheet("forward voltage, VF, at currents")] = None
    inductance: Annotated[Spread | None, Unit("H", "1 nH"), Sheet("package inductance")] = None
    capacitance: Annotated[Spread | None, Unit("F", "10 pF"), Sheet("junction and package capacitance")] = None
    relaxation_frequency: Annotated[
        Spread | None, Unit("Hz", "6 GHz"), Sheet("relaxation oscillation frequency, fr")
    ] = None
    relaxation_current: Annotated[float | None, Unit("A", "30 mA"), Sheet("at IF =")] = None
    damping_factor: Annotated[Spread | None, Unit("s", "0.3 ns"), Sheet("damping K, γ = K fr²")] = None
    lifetime: Annotated[Spread | None, Unit("s", "2 ns"), Sheet("carrier lifetime, τ")] = None
    rin: Annotated[Spread | None, Unit("dB/Hz", "-140 dB/Hz", "any"), Sheet("relative intensity noise, RIN")] = None
    current_max: Annotated[float, Unit("A", "60 mA"), Sheet("absolute maximum forward current")]
    pulse_current_max: Annotated[
        float | None, Unit("A", "40 A"), Sheet("absolute maximum pulsed forward current, peak")
    ] = None
    pulse_width_max: Annotated[float | None, Unit("s", "100 ns"), Sheet("pulse width, most, of that current")] = None
    duty_max: Annotated[float | None, Unit("1", "0.1 %"), Sheet("duty factor, most")] = None
    power_max: Annotated[float, Unit("W", "5 mW"), Sheet("absolute maximum optical output power")]
    reverse_voltage_max: Annotated[float, Unit("V", "2 V"), Sheet("absolute maximum reverse voltage of the laser")]
    junction_to_case: Annotated[Spread, Unit("K/W", "60 K/W"), Sheet("thermal resistance, junction to case")]
    case_max: Annotated[float, Unit("°C", "85 °C", "any"), Sheet("operating case temperature, most")]
    common: Annotated[Common, Sheet("pin diagram: which pins are joined")]
    monitor_responsivity: Annotated[
        Spread | None, Unit("A/W", "0.2 A/W"), Assumed(0.5, 1.0), Sheet("monitor current, Im, over power")
    ] = None
    monitor_capacitance: Annotated[
        Spread | None, Unit("F", "10 pF"), Assumed(0.2, 0.2), Sheet("monitor capacitance")
    ] = None
    monitor_dark_current: Annotated[
        Spread | None, Unit("A", "10 nA", "not negative"), Assumed(0.0, 4.0), Sheet("monitor dark current")
    ] = None
    monitor_reverse_max: Annotated[float | None, Unit("V", "15 V"), Sheet("monitor reverse voltage, most")] = None
    tracking_error: Annotated[Spread | None, Unit("dB", "0.5 dB", "any"), Sheet("tracking error, TE")] = None
    tracking_error_temperatures: Annotated[
        Spread | None, Unit("°C", "25 °C", "any"), Sheet("tracking error from, to")
    ] = None

    choices = (
        Choice(
            "the threshold",
            (
                ("threshold_current", "characteristic_temperature"),
                ("threshold_points",),
                ("threshold_minimum", "threshold_minimum_temperature", "threshold_curvature"),
            ),
        ),
        Choice("the forward voltage", (("turn_on_voltage", "series_resistance"), ("forward",))),
        Choice("the divergence", (("divergence_parallel", "divergence_perpendicular"),), needed=False),
        Choice("the relaxation oscillation", (("relaxation_frequency", "relaxation_current"),), needed=False),
        Choice("the tracking error", (("tracking_error", "tracking_error_temperatures"),), needed=False),
    )

    @property
    def threshold_figure(self) -> Spread:
        """The threshold whose limits stand for those at every temperature; of listed points the nearest to 25 °C."""
        if self.threshold_points is not None:
            return min(self.threshold_points, key=lambda point: abs(point.temperature - ROOM_TEMPERATURE)).current
        figure = self.threshold_current or self.threshold_minimum
        if figure is None:
            raise ValueError("the record states no threshold")
        return figure

    def threshold_at(self, temperature: Real, threshold: Real | None = None) -> Any:
        """Threshold [A] at a junction temperature [K]; `threshold` puts another value in place of `threshold_figure`.

        Exponential with T0; or the parabola of a surface emitter; or through listed points, linear in the logarithm
        of the current, beyond them with the T0 of the end interval.
        """
        nominal = self.threshold_figure.nominal
        figure = nominal if threshold is None else np.asarray(threshold)
        if self.threshold_points is not None:
            at = [point.temperature for point in self.threshold_points]
            logarithms = [float(np.log(point.current.nominal)) for point in self.threshold_points]
            return figure / nominal * np.exp(along(temperature, at=at, values=logarithms))
        if self.characteristic_temperature is not None:
            return threshold_current(
                threshold=figure,
                junction_temperature=temperature,
                reference_temperature=ROOM_TEMPERATURE,
                characteristic_temperature=self.characteristic_temperature,
            )
        if self.threshold_minimum_temperature is None or self.threshold_curvature is None:
            raise ValueError("the record states no change of the threshold with temperature")
        return vcsel_threshold(
            minimum=figure,
            junction_temperature=temperature,
            minimum_temperature=self.threshold_minimum_temperature,
            curvature=self.threshold_curvature,
        )

    def slope_at(self, temperature: Real, slope: Real | None = None) -> Any:
        """Slope efficiency [W/A] at a junction temperature [K]; `slope` is another one at 25 °C than the nominal one.

        Exponential where `slope_temperature` is in K; linear, never below zero, where it is in 1/K; else constant.
        """
        figure = self.slope_efficiency.nominal if slope is None else np.asarray(slope)
        if self.slope_temperature is None:
            return figure + 0.0 * np.asarray(temperature)
        return SLOPES[self.slope_temperature.unit](figure, temperature, self.slope_temperature.value)

    def forward_voltage_at(
        self,
        current: Real,
        position: Real = 0.0,
        turn_on_voltage: Real | None = None,
        series_resistance: Real | None = None,
    ) -> Any:
        """Forward voltage [V] at a current [A].

        From turn-on voltage and series resistance, either of which may be put in place of the nominal one; or
        through the listed points, `position` -1 (least) … 1 (greatest voltage that the sheet allows).
        """
        if self.forward is not None:
            return voltage_through(self.forward, current, position)
        if self.turn_on_voltage is None or self.series_resistance is None:
            raise ValueError("the record states no forward voltage")
        return forward_voltage(
            turn_on_voltage=self.turn_on_voltage.nominal if turn_on_voltage is None else turn_on_voltage,
            current=current,
            series_resistance=self.series_resistance.nominal if series_resistance is None else series_resistance,
        )


def _exponential(slope: Real, temperature: Real, constant: float) -> Any:
    return exponential_slope(
        slope=slope,
        junction_temperature=temperature,
        reference_temperature=ROOM_TEMPERATURE,
        slope_temperature=constant,
    )


def _linear(slope: Real, temperature: Real, coefficient: float) -> Any:
    straight = linear_slope(
        slope=slope,
        junction_temperature=temperature,
        reference_temperature=ROOM_TEMPERATURE,
        slope_coefficient=coefficient,
    )
    return np.maximum(straight, 0.0)


SLOPES: Mapping[str, Callable[[Real, Real, float], Any]] = MappingProxyType({"K": _exponential, "1/K": _linear})
