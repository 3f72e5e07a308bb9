"""The linear LED driver: standing current by hand, harmonics by a transform, its loop, its band, its faults."""

from __future__ import annotations

import numpy as np
import pytest

from opto_ckt.circuits.drivers.led_linear.harmonics import roll_off
from opto_ckt.errors import InfeasibleError, InputError
from opto_ckt.outputs.crosscheck import crosscheck
from opto_ckt.outputs.wiring import drawing_faults
from opto_ckt.result import Result
from tests.circuits.lc import BIPOLAR
from tests.circuits.sized import model, read, sized
from tests.near import near

NAME = "led-linear"
NEGATIVE = (
    ("supply  ", 'supply = { positive = "5 V", negative = "-2 V", tolerance = "5 %" }'),
    ("supply_max", 'supply_max = "12 V"'),
)
VARIANTS = pytest.mark.parametrize("changes", [(), BIPOLAR, NEGATIVE], ids=["mosfet", "bipolar", "negative supply"])


def figure(result: Result, name: str) -> tuple[float, float, float]:
    found = next(figure for figure in result.figures if figure.name == name)
    return found.low, found.nominal, found.high


@VARIANTS
def test_the_sense_voltage_is_the_set_voltage_in_every_scene(changes: tuple[tuple[str, str], ...]) -> None:
    """Offset, bias current and finite gain apart the op amp makes them equal; the base takes its part."""
    for scene in sized(NAME, *changes).scenes:
        v = scene.values
        gain = v["Q1.current_gain"] / (v["Q1.current_gain"] + 1) if "Q1.current_gain" in v else 1.0
        assert v["D1.current"] == near(v["node.sense"] / v["R1"] * gain, rel=1e-9)
        error = v["U1.offset"] + v["U1.bias_current"] * v["R4"] - v["node.control"] / v["U1.open_loop_gain"]
        assert v["node.sense"] == near(v["node.plus"] + error, rel=1e-6)
        below = v["D1.current"] * v["R7"] + v["D1.forward_voltage"]
        assert v["node.drain"] == near(v["supply.positive"] - below, rel=1e-9)


@VARIANTS
def test_decks_agree_at_nominal_and_two_corners(changes: tuple[tuple[str, str], ...]) -> None:
    rows = crosscheck(sized(NAME, *changes), "ngspice")
    assert len({row.scene for row in rows}) == 3
    assert not [row for row in rows if not row.ok]


def test_decks_agree_in_neospice() -> None:
    assert not [row for row in crosscheck(sized(NAME), "neospice") if not row.ok]


@VARIANTS
def test_the_drawing_joins_what_the_topology_joins(changes: tuple[tuple[str, str], ...]) -> None:
    assert drawing_faults(model(NAME, *changes).topology) == []


def test_harmonics_agree_with_a_transform_of_the_light() -> None:
    """A cosine of half the standing current through the law of the sheet's two powers."""
    result = sized(NAME)
    law = roll_off(read(NAME).request.source)
    assert law is not None
    standing = figure(result, "current")[1]
    phase = 2 * np.pi * np.arange(4096) / 4096
    current = standing * (1 + 0.5 * np.cos(phase))
    light = current / (1 + current / law.saturation_current)
    lines = np.abs(np.fft.rfft(light)) / 2048
    second, third = (20 * np.log10(lines[order] / lines[1]) for order in (2, 3))
    assert figure(result, "harmonic_2")[1] == pytest.approx(second, abs=1e-6)
    assert figure(result, "harmonic_3")[1] == pytest.approx(third, abs=1e-4)
    assert figure(result, "optical_index")[1] == pytest.approx(2 * lines[1] / lines[0], rel=1e-6)


def test_drv_15_through_the_points_of_a_sheet() -> None:
    """Closed form beside a transform: 0.02 W/A, 0.5 A, 50 mA ± 20 mA give 0.01818 and its square."""

    def watts(milliamperes: float) -> str:
        current = milliamperes * 1e-3
        return f"{0.02 * current / (1 + current / 0.5)!r} W"

    result = sized(
        NAME,
        (r"    \{ current = \"20 mA\", power", f'    {{ current = "20 mA", power = "{watts(20)}" }},'),
        (r"    \{ current = \"60 mA\", power", f'    {{ current = "60 mA", power = "{watts(60)}" }},'),
        ("current           =", 'current = "50 mA"'),
        ("modulation_index", 'modulation_index = "40 %"'),
    )
    current = figure(result, "current")[1]
    assert 10 ** (figure(result, "harmonic_2")[1] / 20) == near(0.4 * current / (2 * (0.5 + current)), rel=1e-3)
    assert 10 ** (figure(result, "harmonic_2")[1] / 20) == near(0.01818182, rel=0.03)  # standing current as rounded


def test_one_point_of_light_tells_no_harmonics() -> None:
    result = sized(NAME, (r"    \{ current = \"60 mA\", power", ""), ("harmonic_2", ""))
    assert not [found for found in result.figures if found.name.startswith("harmonic")]
    assert any("no harmonics are told" in caution for caution in result.cautions)


def test_the_band_is_kept_at_every_corner() -> None:
    result = sized(NAME)
    assert figure(result, "low_cutoff")[2] <= 20.0
    assert figure(result, "bandwidth")[0] >= 100e3


def test_the_crest_stays_within_the_led_and_the_supply() -> None:
    result = sized(NAME)
    assert figure(result, "peak_current")[2] <= 80e-3
    assert figure(result, "compliance_margin")[0] >= 0.0


def test_faults_are_held_by_the_fail_safe_resistor() -> None:
    faults = {fault.case: fault for fault in sized(NAME).faults}
    assert all(fault.ok for fault in faults.values())
    assert "limited by R7" in faults["pass transistor short"].result
    assert faults["load open"].result == "no current through the LED"


def test_a_crest_beyond_the_led_is_refused() -> None:
    with pytest.raises(InputError, match="above current_max"):
        read(NAME, ("current           =", 'current = "70 mA"'))


def test_a_p_type_transistor_is_refused() -> None:
    with pytest.raises(InputError, match="does not sink current"):
        read(NAME, ("kind ", 'kind = "pmos"'))


def test_a_supply_that_does_not_carry_the_crest_is_infeasible() -> None:
    low = ("supply  ", 'supply = { positive = "2.6 V", tolerance = "5 %" }')
    with pytest.raises(InfeasibleError, match="does not carry the crest"):
        sized(NAME, low, ("supply_min", 'supply_min = "1.8 V"'))
