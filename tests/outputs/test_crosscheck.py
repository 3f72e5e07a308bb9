"""Prediction against simulation: every design in both engines, each noise generator by itself, a check that fails."""

from __future__ import annotations

from dataclasses import replace
from shutil import which

import numpy as np
import pytest

from opto_ckt.analyses import noise
from opto_ckt.analyses.network import Network
from opto_ckt.analyses.network.expansion import expand
from opto_ckt.outputs.crosscheck import crosscheck, crosscheck_table
from opto_ckt.outputs.simulators import ENGINES, run
from opto_ckt.outputs.spice import deck_of
from opto_ckt.result import Result, Scene
from tests.outputs.test_spice import SOURCES, result_of

here = [engine for engine in ENGINES if engine == "neospice" or which("ngspice")]
SILENT = 1e-40  #: so little noise that a deck leaves its generator out

GENERATORS = {
    "U1 voltage": {"U1.voltage_noise": 1e-6, "U1.current_noise": SILENT},
    "U1 current": {"U1.voltage_noise": SILENT, "U1.current_noise": 5e-12},
    "D1 ambient shot": {"U1.voltage_noise": SILENT, "U1.current_noise": SILENT, "D1.ambient_shot": 1e-3},
    "D1 dark shot": {"U1.voltage_noise": SILENT, "U1.current_noise": SILENT, "D1.dark_shot": 1e-3},
    "D1 signal shot": {"U1.voltage_noise": SILENT, "U1.current_noise": SILENT, "D1.signal_shot": 1e-3},
    "R1 thermal": {
        "U1.voltage_noise": SILENT, "U1.current_noise": SILENT,
        "D1.ambient_shot": 0.0, "D1.signal_shot": 0.0, "D1.dark_shot": 0.0,
    },
}  # fmt: skip
"""Generator -> values that let it drown the others."""


@pytest.mark.parametrize("engine", here)
@pytest.mark.parametrize("source", SOURCES)
def test_prediction_and_simulation_agree(source: str, engine: str) -> None:
    result = result_of(source)
    rows = crosscheck(result, engine)
    assert len({row.scene for row in rows}) == len(result.scenes) == 3
    assert [row for row in rows if not row.ok] == []


@pytest.mark.parametrize("engine", here)
@pytest.mark.parametrize("generator", GENERATORS)
def test_each_generator_of_noise_by_itself(generator: str, engine: str) -> None:
    result = result_of("tia")
    scene = replace(result.scenes[0], values={**result.scenes[0].values, **GENERATORS[generator]})
    plot = run(deck_of(result, scene, "noise"), engine)["noise"]
    evaluation = Network(expand(result.topology)).evaluate(scene.values)
    for index in (0, len(plot["frequency"]) // 2, -1):
        parts = noise.density_by_generator(evaluation, plot["frequency"][index])
        total = sum(float(power[0]) for power in parts.values())
        assert float(parts[generator][0]) > 0.5 * total
        assert float(plot["onoise"][index]) == pytest.approx(np.sqrt(total), rel=1e-5)


@pytest.mark.parametrize("engine", here)
@pytest.mark.parametrize(
    ("figure", "changed", "quantity"),
    [
        ("C1", 0.9e-12, "gain"),
        ("R1", 20e3, "gain"),
        ("U1.voltage_noise", 6.1e-9, "noise"),
        ("U1.offset", 2e-3, "level"),
    ],
)
def test_a_deck_written_for_other_values_is_told(
    figure: str, changed: float, quantity: str, engine: str, monkeypatch: pytest.MonkeyPatch
) -> None:
    def other(result: Result, scene: Scene, kind: str) -> str:
        return deck_of(result, replace(scene, values={**scene.values, figure: changed}), kind)

    monkeypatch.setattr("opto_ckt.outputs.crosscheck.deck_of", other)
    rows = crosscheck(result_of("tia"), engine)
    assert any(quantity in row.quantity for row in rows if not row.ok)
    assert "APART" in crosscheck_table(rows)


@pytest.mark.parametrize("engine", here)
def test_a_current_that_is_off_is_told_on_the_high_side(engine: str, monkeypatch: pytest.MonkeyPatch) -> None:
    """2 % more set voltage, which is 0.1 % of the level that the sense node has against ground."""

    def other(result: Result, scene: Scene, kind: str) -> str:
        return deck_of(result, replace(scene, values={**scene.values, "R3": 1.02 * scene.values["R3"]}), kind)

    result = result_of("laser-current.toml")
    assert result.topology.output[0] == "rail"
    monkeypatch.setattr("opto_ckt.outputs.crosscheck.deck_of", other)
    assert any(row.quantity == "level of obs" for row in crosscheck(result, engine) if not row.ok)
