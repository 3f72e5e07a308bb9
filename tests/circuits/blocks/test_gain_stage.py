"""Voltage gain behind the transimpedance stage: how it is split, what it costs, what is refused."""

from __future__ import annotations

from shutil import which

import numpy as np
import pytest

from opto_ckt.analyses import noise
from opto_ckt.errors import InputError
from opto_ckt.formulas.second_stage import (
    gain_for_transimpedance,
    second_stage_bandwidth,
    upper_feedback_resistance,
)
from opto_ckt.outputs.crosscheck import crosscheck
from opto_ckt.outputs.simulators import ENGINES as SIMULATORS
from opto_ckt.outputs.wiring import drawing_faults
from tests.circuits.sized import model, sized

ENGINES = [engine for engine in SIMULATORS if engine == "neospice" or which("ngspice")]

SPLIT = (
    ("power ", 'power = { typ = "2 µW", max = "5 µW" }'),
    ("ambient ", 'ambient = "0.1 µA"'),
    ("output_swing ", 'transimpedance = { min = "150 kV/A" }'),
    ("", "[blocks]\ngain_stage = {}"),
)


def test_relations() -> None:
    assert gain_for_transimpedance(transimpedance=150e3, first=20e3) == pytest.approx(7.5)
    assert upper_feedback_resistance(gain=7.5, lower=499.0) == pytest.approx(3243.5)
    assert second_stage_bandwidth(gain_bandwidth=400e6, transimpedance=150e3, first=20e3) == pytest.approx(
        53.33e6, rel=1e-4
    )


def test_both_stages_together_meet_what_one_alone_cannot() -> None:
    result = sized("tia", *SPLIT)
    assert result.verdict == "met", [row for row in result.requirements if not row.met]
    alone = sized("tia", *SPLIT[:-1])
    assert alone.verdict == "missed"


def test_transimpedance_is_the_product_of_the_stages() -> None:
    result = sized("tia", *SPLIT)
    value = {part.ref: part.value for part in result.parts}
    product = value["R1"] * (1 + value["R50"] / value["R51"])
    assert result.figure("transimpedance").nominal == pytest.approx(product, rel=2e-3)


def test_network_has_the_noise_of_the_second_stage_over_its_gain() -> None:
    """Far below every pole the second op amp's noise appears at the output times the gain."""
    found = model("tia", *SPLIT)
    values = found.nominal() | {"R1": 20e3, "C1": 0.8e-12, "R50": 3.24e3, "R51": 499.0, "C58": 1e-7, "C59": 1e-7}
    biased = found.biased(values)
    density = noise.density_by_generator(found.evaluation(biased), 1e5)
    gain, corner = 1 + 3240 / 499, float(biased["U50.voltage_noise_corner"])
    expected = (gain * values["U50.voltage_noise"]) ** 2 * (1 + corner / 1e5)
    assert density["U50 voltage"][0] == pytest.approx(expected, rel=2e-3)


def test_overload_is_that_of_the_stage_that_clips_first() -> None:
    found = model("tia", *SPLIT)
    parts = {"R1": 20e3, "C1": 0.8e-12, "R51": 499.0, "C58": 1e-7, "C59": 1e-7}
    lanes = {**found.nominal(), **parts, "R50": np.array([1.0, 3240.0])}
    overload = found.evaluate({name: np.broadcast_to(value, 2) for name, value in lanes.items()})["overload"]
    assert overload[0] / overload[1] == pytest.approx(1 + 3240 / 499, rel=0.05)


def test_the_drawing_joins_what_the_topology_joins() -> None:
    assert drawing_faults(sized("tia", *SPLIT).topology) == []


@pytest.mark.parametrize("engine", ENGINES)
def test_decks_agree(engine: str) -> None:
    assert [row for row in crosscheck(sized("tia", *SPLIT), engine) if not row.ok] == []


@pytest.mark.parametrize(
    ("changes", "told"),
    [
        ((("", "[blocks]\ngain_stage = {}"),), "blocks.gain_stage: needs gain"),
        ((("", '[blocks]\ngain_stage = { gain = "1" }'),), "blocks.gain_stage.gain: 1 is no gain"),
        (
            (
                ("supply ", 'supply = { positive = "5 V" }\ninput_level = "1.5 V"'),
                ("", '[blocks]\ngain_stage = { gain = "3" }'),
            ),
            "would amplify conditions.input_level",
        ),
    ],
)
def test_what_does_not_go_is_refused(changes: tuple[tuple[str, str], ...], told: str) -> None:
    with pytest.raises(InputError) as refused:
        sized("tia", *changes)
    assert told in str(refused.value)
