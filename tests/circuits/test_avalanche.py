"""Avalanche detectors in several receivers: gain, noise, dark currents, the gain that serves best; two roads each."""

from __future__ import annotations

from math import erfc

import numpy as np
import pytest
from scipy.optimize import brentq

from opto_ckt.analyses import noise, response
from opto_ckt.circuits.receivers.detector import bias_reach
from opto_ckt.constants import ELEMENTARY_CHARGE, ROOM_TEMPERATURE
from opto_ckt.derivation import Derivation
from opto_ckt.design.model import Model
from opto_ckt.design.sizing import settled
from opto_ckt.errors import InfeasibleError
from opto_ckt.outputs.crosscheck import crosscheck
from opto_ckt.parts.avalanche import bias_for_gain, breakdown, gain_at
from tests.circuits.lit import BARE, RECEIVERS, Changes, evaluated, lit
from tests.circuits.sized import model, sized
from tests.near import near
from tests.outputs.test_simulators import ENGINES

HOT = ROOM_TEMPERATURE + 35.0
AVALANCHE = """\
reverse_voltage_max = "200 V"
gain_points = [ { bias = "60 V", gain = "2" }, { bias = "120 V", gain = "10" }, { bias = "150 V", gain = "60" } ]
breakdown_voltage = { min = "155 V", typ = "160 V" }
breakdown_temperature = "0.4 V/K"
multiplied_dark_current = { typ = "50 pA", max = "200 pA" }
surface_dark_current = { typ = "2 nA", max = "6 nA" }
gain_bandwidth_product = "60 GHz"
excess
"""
MCINTYRE, POWER_LAW = "ionisation_ratio = 0.3", "excess_noise_exponent = 0.5"
SUPPLY = '[bias]\nsupply = "180 V"\ntolerance = "0.2 %"'


PLAIN_FIXED: Changes = (
    *BARE,
    ("ripple ", ""), ("ripple_frequency", ""),
    (r"supply +=  *\"3", 'supply = "180 V"'), (r"tolerance +=", 'tolerance = "0.2 %"'),
)  # fmt: skip


def avalanche(name: str, gain: str = '"10"', excess: str = MCINTYRE) -> Changes:
    """The starter of a receiver with an avalanche diode in it, light and blocks of the fixed amplifier left out."""
    diode = ("reverse_voltage_max", AVALANCHE.replace("excess", excess) + f"gain = {gain}")
    light = ("power  ", 'power = { typ = "0.1 µW", max = "1 µW" }')
    if name == "tia-fixed":
        return (diode, ("reverse_bias", ""), light, *PLAIN_FIXED)
    return (diode, ("reverse_bias", ""), light, ("", SUPPLY))


def by_miller(bias: float, temperature: float) -> float:
    """Gain by 1/(1 - (V/V_0)^n) through the two listed points around the bias, shifted with the temperature."""
    points = [(60.0, 2.0), (120.0, 10.0), (150.0, 60.0)]
    bias = bias - 0.4 * (temperature - ROOM_TEMPERATURE)
    (v_1, m_1), (v_2, m_2) = points[:2] if bias < 120 else points[1:]

    def apart(exponent: float) -> float:
        scale = v_1 / (1 - 1 / m_1) ** (1 / exponent)
        return 1 / (1 - (v_2 / scale) ** exponent) - m_2

    exponent = brentq(apart, 1e-2, 2 * np.log(m_1 / (m_1 - 1)) / np.log(v_2 / v_1) * 0.49999)
    return 1 / (1 - (bias / (v_1 / (1 - 1 / m_1) ** (1 / exponent))) ** exponent)


@pytest.mark.parametrize("name", RECEIVERS)
@pytest.mark.parametrize("temperature", [253.15, ROOM_TEMPERATURE, 333.15])
def test_gain_over_temperature_at_the_bias_of_the_receiver(name: str, temperature: float) -> None:
    changes = avalanche(name)
    found, values = lit(name, changes)
    biased, _ = evaluated(name, changes, temperature=temperature)
    bias = biased["detector.reverse_bias"]
    assert biased["D1.gain"] == near(by_miller(bias, temperature), rel=1e-4)
    assert found.request.detector.resting_bias == near(120.0, rel=1e-6)
    assert bias <= 120.0 * (1 + 1e-9)
    assert biased["D1.responsivity"] == near(values["D1.responsivity"] * biased["D1.gain"])


def test_bias_for_a_gain_follows_the_temperature_and_ends_at_breakdown() -> None:
    detector = model("tia", *avalanche("tia")).request.detector
    for temperature in (253.15, HOT):
        for gain in (2.0, 7.0, 40.0):
            bias = bias_for_gain(detector, gain, temperature)
            assert gain_at(detector, bias, temperature) == near(gain, rel=1e-9)
            assert bias - bias_for_gain(detector, gain) == pytest.approx(0.4 * (temperature - ROOM_TEMPERATURE))
        end = breakdown(detector, temperature)
        assert end <= 155.0 + 0.4 * (temperature - ROOM_TEMPERATURE) + 1e-9
        assert np.isfinite(gain_at(detector, 0.99 * end, temperature))
    told = sized("tia", *avalanche("tia")).cautions
    assert any("avalanche gain 10 at 120 V" in text and "the same gain takes" in text for text in told)


@pytest.mark.parametrize("name", RECEIVERS)
@pytest.mark.parametrize("excess", [MCINTYRE, POWER_LAW])
def test_noise_of_light_and_of_both_dark_currents_at_the_output(name: str, excess: str) -> None:
    """2q M² F times light and bulk dark current, 2q times the leakage along the surface, through the gain in place."""
    changes = avalanche(name, excess=excess)
    biased, evaluation = evaluated(name, changes, temperature=HOT, signal__ambient=3e-9)
    gain, temperature_ratio = biased["D1.gain"], 2.0 ** (35.0 / 10.0)
    factor = 0.3 * gain + 0.7 * (2 - 1 / gain) if excess == MCINTYRE else gain**0.5
    power = biased["signal.power"]
    primary = {
        "signal": biased["D1.responsivity"] / gain * power,
        "ambient": 3e-9,
        "dark": 50e-12 * temperature_ratio,
    }
    surface = 2e-9 * temperature_ratio
    frequency = 1e6
    density = noise.density_by_generator(evaluation, frequency)
    passed = abs(response.transfer_at(evaluation, frequency)[0]) / biased["D1.responsivity"]
    passed *= np.hypot(1, frequency / biased["D1.transit_frequency"])  # shot noise does not wait for the light's pole
    for kind, current in primary.items():
        shot = 2 * ELEMENTARY_CHARGE * current * gain**2 * factor
        shot += 2 * ELEMENTARY_CHARGE * surface if kind == "dark" else 0.0
        assert density[f"D1 {kind} shot"][0] == near(shot * passed**2, rel=1e-9)
    assert biased["D1.dark_current"] == near(surface + primary["dark"] * gain)


def test_all_of_an_undivided_dark_current_counts_as_multiplied() -> None:
    changes = avalanche("tia")
    whole = tuple(
        (pattern, "\n".join(line for line in text.splitlines() if "_dark_current" not in line))
        for pattern, text in changes
    )
    at = ("dark_current  ", 'dark_current = { typ = "5 nA", max = "9 nA" }\ndark_current_bias = "60 V"')
    biased, _ = evaluated("tia", (*whole, at))
    assert biased["D1.dark_current"] == near(5e-9 / 2 * biased["D1.gain"])


@pytest.mark.parametrize(
    ("name", "excess"), [("tia", MCINTYRE), ("tia", POWER_LAW), ("load-resistor", MCINTYRE), ("tia-fixed", MCINTYRE)]
)
def test_best_gain_against_a_scan_of_the_real_sensitivity(name: str, excess: str) -> None:
    """Finite extinction, dark current and a gain-bandwidth product; every trial sized anew, 48 gains, as allowed."""
    asked = model(name, *avalanche(name, '"optimum"', excess))
    best = settled(asked)
    gains = np.geomspace(1.3, 80.0, 48)
    found = [_sensitivity(asked, gain) for gain in gains]
    chosen = best.request.detector.wanted_gain
    assert isinstance(chosen, float)
    assert _sensitivity(asked, chosen) <= min(found) * 10**0.005  # 0.05 dB: the sizing of trials moves in steps
    finite = [power for power in found if np.isfinite(power)]
    assert len(finite) > 20
    assert max(finite) > 1.2 * min(finite)


def _sensitivity(asked: Model, gain: float) -> float:
    detector = asked.request.detector.model_copy(update={"wanted_gain": float(gain)})
    tried = asked.asked(asked.request.model_copy(update={"detector": detector}))
    if tried.circuit.refused(tried.request):
        return np.inf
    try:
        fitted = tried.proposal(Derivation())
    except InfeasibleError:
        return np.inf
    value = float(tried.bench().evaluate({part.ref: np.array([part.exact]) for part in fitted})["sensitivity"][0])
    return value if np.isfinite(value) else np.inf


@pytest.mark.parametrize("name", RECEIVERS)
def test_sensitivity_against_a_search_for_the_power_that_gives_q(name: str) -> None:
    """Levels and noise of ones and zeros put together from the generators; the root of Q(P) = Q wanted."""
    found, values = lit(name, avalanche(name))
    changes = avalanche(name)
    biased, evaluation = evaluated(name, changes)
    figures = found.evaluate({key: np.array([value]) for key, value in values.items()})
    request = found.request
    band = (1.0, 100 * request.signal.bit_rate * 0.7)
    required = request.require.get("bandwidth")
    band = (1.0, 100 * required.min) if required is not None and required.min else band
    rms = noise.rms_by_generator(evaluation, band)
    steady = sum(float(value[0]) ** 2 for label, value in rms.items() if not label.endswith("signal shot"))
    per_watt = float(rms["D1 signal shot"][0]) ** 2 / biased["signal.power"]
    gain = float(figures["transimpedance"][0]) * biased["D1.responsivity"] * float(figures["eye_opening"][0])
    ratio = request.signal.extinction_ratio
    wanted = brentq(lambda q: 0.5 * erfc(q / 2**0.5) - request.signal.bit_error_ratio, 1, 12)

    def apart(logarithm: float) -> float:
        zero = 2 * np.exp(logarithm) / (1 + ratio)
        one = ratio * zero
        return gain * (one - zero) / (np.sqrt(steady + per_watt * one) + np.sqrt(steady + per_watt * zero)) - wanted

    power = np.exp(brentq(apart, np.log(1e-11), np.log(1e-3)))
    assert float(figures["sensitivity"][0]) == near(power, rel=2e-3)


@pytest.mark.parametrize("name", ["tia", "load-resistor"])
def test_most_gain_of_bias_and_cold_still_fits_the_swing(name: str) -> None:
    """A bias tolerance raises the gain most in the cold: R1 is sized for that, the bound on the swing holds."""
    result = sized(name, *avalanche(name))
    rows = {row.requirement.figure: row for row in result.requirements}
    assert rows["output_swing"].met
    assert "overload" not in rows
    request = model(name, *avalanche(name)).request
    reach = bias_reach(request, 1)
    assert reach == near(120.0 * 1.002)
    most = by_miller(reach, request.conditions.temperature.low)
    assert most > 2 * 10.0
    light = most * 1.0 * 1e-6 * 2 * 10**0.9 / (10**0.9 + 1) + most * 1e-6
    value = {part.ref: part.value for part in result.parts}
    assert value["R1"] is not None
    assert light * value["R1"] < 2.0


@pytest.mark.parametrize("engine", ENGINES)
@pytest.mark.parametrize("name", ["tia", "load-resistor"])
def test_decks_of_an_avalanche_detector_agree(name: str, engine: str) -> None:
    rows = crosscheck(sized(name, *avalanche(name)), engine)
    assert [row for row in rows if not row.ok] == []
