"""Light of the constant-current laser driver: its noise, distance from runaway, wavelength, and a cooled case."""

from __future__ import annotations

from math import log10, sqrt
from typing import Any

import numpy as np
import pytest

from opto_ckt.analyses.network.expansion import expand
from opto_ckt.circuits.drivers import intensity, runaway
from opto_ckt.circuits.drivers.laser import forward, thermal_resistance
from opto_ckt.circuits.drivers.warmth import heat
from opto_ckt.constants import LIGHT_SPEED, PLANCK, ROOM_TEMPERATURE, ZERO_CELSIUS
from opto_ckt.design.model import Model
from opto_ckt.errors import InputError
from opto_ckt.formulas.laser_heating import runaway_factor, settle_at_power
from opto_ckt.limits import Corner, values_at
from opto_ckt.result import Result
from tests.analyses.direct import Direct
from tests.circuits.lc import BIPOLAR, CHOSEN, HIGH, POINTS, SURFACE
from tests.circuits.sized import model, read, sized
from tests.near import near

NAME = "laser-current"
COOLED = (
    ("temperature  ", 'temperature = "25 °C"\nair = { min = "-30 °C", max = "60 °C" }\ntemperature_of = "case"'),
    ("sink_resistance", 'sink_resistance = "100 K/W"'),
)
LINEAR = (("slope_temperature", 'slope_temperature = "-0.4 %/K"'),)


def biased(found: Model, **changes: Any) -> dict[str, Any]:
    return found.biased(found.nominal() | CHOSEN | changes)


def said(result: Result, word: str) -> str:
    (sentence,) = [caution for caution in result.cautions if word in caution]
    return sentence


def offered(result: Result) -> set[str]:
    return {figure.name for figure in result.figures}


def test_runaway_factor_is_that_of_exponential_laws() -> None:
    found = model(NAME)
    values = biased(found)
    by_hand = runaway_factor(
        thermal_resistance=80.0 + 40.0,
        turn_on_voltage=0.92,
        series_resistance=5.0,
        current=values["D1.current"],
        threshold=values["D1.threshold_current"],
        characteristic_temperature=70.0,
        slope_temperature=250.0,
    )
    assert runaway.factor(values, found.request) == near(by_hand, rel=1e-6)


@pytest.mark.parametrize(
    "changes", [(), POINTS, SURFACE, LINEAR], ids=["exponential", "listed points", "surface emitter", "linear slope"]
)
def test_runaway_margin_is_where_another_road_loses_its_solution(changes: tuple[tuple[str, str], ...]) -> None:
    """The same light is asked for in ever warmer surroundings, by the solver of constant power."""
    found = model(NAME, *changes)
    values = biased(found, **{"D1.junction_to_case": 1500.0})
    request, data = found.request, found.request.source
    margin = float(runaway.margin(values, request))
    line = forward(values, request, values["D1.current"])

    def junction(rise: float) -> float:
        point = settle_at_power(
            power=float(values["D1.power"]),
            case_temperature=float(values["temperature"]) + rise,
            thermal_resistance=float(thermal_resistance(values, request)),
            turn_on_voltage=float(line.turn_on),
            series_resistance=float(line.resistance),
            threshold=lambda at: data.threshold_at(at, values["D1.threshold_current.room"]),
            slope=lambda at: data.slope_at(at, values["D1.slope_efficiency.room"]),
            hottest=runaway.HOTTEST,
        )
        return float(point.junction_temperature)

    assert margin > 5
    assert np.isfinite(junction(margin - 0.05))
    assert np.isnan(junction(margin + 0.05))


def test_past_the_peak_of_the_light_the_margin_is_negative_and_without_light_there_is_none() -> None:
    found = model(NAME)
    past = biased(found, **{"D1.junction_to_case": 2500.0})
    assert past["D1.power"] > 0
    assert runaway.factor(past, found.request) > 1
    assert runaway.margin(past, found.request) < 0
    dark = biased(found, **{"D1.threshold_current": 60e-3})
    assert runaway.margin(dark, found.request) == 0


@pytest.mark.parametrize("changes", [(), HIGH, BIPOLAR], ids=["low", "high", "bipolar"])
def test_current_noise_by_a_plain_nodal_matrix(changes: tuple[tuple[str, str], ...]) -> None:
    """Current of the laser itself, R1's noise with its phase; that by the sense voltage, and that by hand, beside."""
    found = model(NAME, *changes)
    values = biased(found)
    frequency = found.circuit.noise_frequency(found.request)
    expansion = expand(found.topology)
    laser = found.topology["D1"]
    network = Direct(expansion, {name: float(np.asarray(value)) for name, value in values.items()}, frequency)
    ends = network.incidence(laser.anode, laser.cathode)
    power = 0.0
    for generator in expansion.generators:
        corner = float(generator.corner(values)) if generator.corner else 0.0
        density = float(generator.density(values)) * (1 + corner / frequency)
        power += density * abs(ends @ network.voltages(generator.nodes) / float(values["D1.series_resistance"])) ** 2
    evaluation = found.network.evaluate(values)
    share = 1.0 if changes != BIPOLAR else values["Q1.current_gain"] / (values["Q1.current_gain"] + 1)
    ours = float(intensity.current_noise(values, evaluation, frequency, share)[0])
    assert ours == near(sqrt(power), rel=0.01)
    assert float(intensity.estimated_current_noise(values, frequency)) == near(sqrt(power), rel=0.03)


def test_noises_of_the_light_by_their_definitions() -> None:
    found = model(NAME)
    values = biased(found)
    light, slope = float(values["D1.optical_power"]), float(values["D1.slope_efficiency"])
    assert float(intensity.driver_noise(np.asarray(1e-9), values)) == near(20 * log10(slope * 1e-9 / light))
    photons = 2 * PLANCK * LIGHT_SPEED / 1310e-9 / light
    assert float(intensity.shot_floor(values, found.request)) == near(10 * log10(photons))


def test_the_greatest_noise_is_named_and_an_unstated_one_is_said() -> None:
    silent = sized(NAME)
    assert "laser_intensity_noise" not in offered(silent)
    assert {"driver_intensity_noise", "shot_intensity_noise"} <= offered(silent)
    assert "states none of its own" in said(silent, "current noise")
    assert "the driver's is the greatest" in said(silent, "current noise")
    noisy = sized(NAME, ("common  ", 'common = "none"\nrin = "-120 dB/Hz"'))
    assert noisy.figure("laser_intensity_noise").nominal == near(-120.0)
    assert "the laser's own is the greatest" in said(noisy, "current noise")


def test_a_spread_of_the_laser_s_noise_reaches_its_figure() -> None:
    noisy = sized(NAME, ("common  ", 'common = "none"\nrin = { typ = "-140 dB/Hz", max = "-130 dB/Hz" }'))
    assert noisy.figure("laser_intensity_noise").high == near(-130.0)


def test_wavelength_follows_the_junction() -> None:
    assert "wavelength_shift" not in offered(sized(NAME))
    moving = sized(NAME, ("wavelength  ", 'wavelength = "1310 nm"\nwavelength_temperature = "0.4 nm/K"'))
    shift, junction = moving.figure("wavelength_shift"), moving.figure("junction_temperature")
    for end in ("low", "nominal", "high"):
        warm = getattr(junction, end) - ROOM_TEMPERATURE
        assert getattr(shift, end) == near(0.4e-9 * warm)
    assert "O band" in said(moving, "the light lies")


def test_a_cooler_moves_the_laser_s_heat_and_what_the_air_brings() -> None:
    result = sized(NAME, *COOLED)
    load = result.figure("cooler_load")
    chosen = {part.ref: part.value for part in result.parts if part.unit and part.fitted}
    found = model(NAME, *COOLED)

    def laser_heat(at: Corner) -> float:
        return float(found.biased(values_at(result.limits, [at], chosen))["D1.heat"][0])

    assert load.high == near(laser_heat(load.at_high) + 35 / 100.0)
    assert load.low == near(laser_heat(load.at_low) - 55 / 100.0)
    assert load.nominal == near(result.scenes[0].values["D1.heat"])  # the air's typical temperature is 25 °C too
    assert "against up to 35.0 K" in said(result, "cooler")
    assert "cooler_load" not in offered(sized(NAME))


def test_a_cooled_laser_keeps_its_temperature_while_the_transistor_is_in_the_air() -> None:
    cooled, warm = sized(NAME, *COOLED), sized(NAME, *COOLED, ("air", ""))
    assert cooled.figure("junction_temperature").high == near(warm.figure("junction_temperature").high, rel=1e-9)
    found = model(NAME, *COOLED)
    values = biased(found, **{"temperature.air": 60 + ZERO_CELSIUS})
    held = biased(found, **{"temperature.air": 25 + ZERO_CELSIUS})
    assert values["D1.case_temperature"] == near(25 + ZERO_CELSIUS)
    for hot, cold in zip(heat(values, found.request)[1:], heat(held, found.request)[1:], strict=True):
        assert hot.temperature == near(float(cold.temperature) + 35)


@pytest.mark.parametrize(
    ("changes", "message"),
    [
        ((("temperature  ", 'temperature = "25 °C"\nair = "60 °C"'),), 'add temperature_of = "case"'),
        ((COOLED[0], ("sink_resistance", "")), "needs sink_resistance"),
    ],
    ids=["of the air", "no path"],
)
def test_air_around_what_is_not_cooled_is_refused(changes: tuple[tuple[str, str], ...], message: str) -> None:
    with pytest.raises(InputError, match=message):
        read(NAME, *changes)
