"""What must be true of every circuit of the registry; a new line there is asked all of it."""

from __future__ import annotations

import re
from math import isfinite
from pathlib import Path

import numpy as np
import pytest

from opto_ckt.analyses import stability
from opto_ckt.analyses.network import Network
from opto_ckt.analyses.network.expansion import expand
from opto_ckt.analyses.response import transfer_at
from opto_ckt.analyses.symbolic import lcapy_transfer
from opto_ckt.circuits import CIRCUITS, load
from opto_ckt.cli.files import every_file
from opto_ckt.design.reading import read_request
from opto_ckt.design.sizing import size
from opto_ckt.figures import FIGURES
from opto_ckt.result import FoundPart
from tests.circuits.sized import read, sized

DESIGNS = Path(__file__).parents[2] / "designs"
NAMES = [path.stem for path in sorted(DESIGNS.glob("*.toml")) if path.stem != "parts"]
DESIGNATOR = re.compile(r"[A-Z]+[0-9]{1,2}")


@pytest.mark.parametrize("name", CIRCUITS)
def test_it_is_what_the_registry_says(name: str) -> None:
    circuit = load(name)
    assert circuit.name == name
    assert circuit.title
    assert set(circuit.offers) <= set(FIGURES)
    assert circuit.formulas
    assert circuit.levers
    assert circuit.not_checked


@pytest.mark.parametrize("name", CIRCUITS)
def test_its_starter_meets_every_requirement(name: str) -> None:
    result = sized(name)
    assert result.verdict == "met", [row for row in result.requirements if not row.met]


@pytest.mark.parametrize("name", CIRCUITS)
def test_it_has_a_design_that_meets_every_requirement(name: str) -> None:
    path = str(DESIGNS / f"{name}.toml")
    read = read_request(path, circuit_of=lambda circuit: load(circuit).request, circuits=CIRCUITS)
    result = size(read, load(read.request.circuit))
    assert read.request.circuit == name
    assert result.verdict == "met", [row for row in result.requirements if not row.met]
    assert all(row.ok for row in result.heat)


def test_every_design_is_of_a_circuit_of_the_registry() -> None:
    assert set(NAMES) == set(CIRCUITS)


@pytest.mark.parametrize("name", CIRCUITS)
def test_figures_come_as_low_nominal_high(name: str) -> None:
    for figure in sized(name).figures:
        assert not any(map(np.isnan, (figure.low, figure.nominal, figure.high))), figure
        assert figure.low <= figure.nominal <= figure.high, figure


@pytest.mark.parametrize("name", CIRCUITS)
def test_designators_are_unique_and_tell_circuit_from_blocks(name: str) -> None:
    """One digit and no more in a circuit, two in its blocks; the driver's bias has the tens."""
    refs = [element.ref for element in sized(name).topology]
    assert len(set(refs)) == len(refs)
    assert all(DESIGNATOR.fullmatch(part.ref) for part in sized(name).parts)
    base = load(name).topology(read(name).request)
    assert all(int(re.sub(r"\D", "", element.ref)) < 20 for element in base.fitted)


@pytest.mark.parametrize("name", CIRCUITS)
def test_every_chosen_value_has_its_reason(name: str) -> None:
    result = sized(name)
    for part in result.parts:
        assert part.formula
        step = result.derivation.of(part.ref)
        assert step is None or part.source


@pytest.mark.parametrize("name", CIRCUITS)
def test_every_loaded_part_has_a_required_rating_that_bears_the_load(name: str) -> None:
    loaded = [part for part in sized(name).parts if part.stress and part.fitted]
    assert loaded
    for part in loaded:
        assert part.required_rating, part.ref
        for load_name, rating in part.required_rating.items():
            assert rating >= part.stress.get(load_name, 0.0), part.ref


@pytest.mark.parametrize("name", CIRCUITS)
def test_faults_are_computed_and_said(name: str) -> None:
    faults = sized(name).faults
    assert len(faults) >= 5
    assert len({fault.case for fault in faults}) == len(faults)
    assert all(re.search(r"\d|no current", fault.result) for fault in faults)


@pytest.mark.parametrize("name", CIRCUITS)
def test_the_same_design_gives_the_same_bytes(name: str) -> None:
    circuit = load(name)

    def files() -> dict[str, str]:
        path = str(DESIGNS / f"{name}.toml")
        return every_file(size(read_request(path, circuit_of=lambda c: load(c).request, circuits=CIRCUITS), circuit))

    assert files() == files()


@pytest.mark.parametrize("name", CIRCUITS)
def test_its_network_agrees_with_lcapy(name: str) -> None:
    """Capacitances near a picofarad beside farads of a supply filter: values scattered about those of the scene."""
    scene = sized(name).scenes[0]
    expansion = expand(sized(name).topology)
    network = Network(expansion)
    random = np.random.default_rng(7)
    values = {key: scene.values[key] * float(random.uniform(0.7, 1.4)) for key in sorted(network.inputs)}
    frequencies = np.geomspace(1e3, 1e8, 5)
    ours = transfer_at(network.evaluate(values), frequencies[:, None])[:, 0]
    np.testing.assert_allclose(lcapy_transfer(expansion, values, frequencies), ours, rtol=1e-6)


@pytest.mark.parametrize("name", CIRCUITS)
def test_its_loop_is_stable_wherever_it_was_looked_at(name: str) -> None:
    network = Network(expand(sized(name).topology))
    for scene in sized(name).scenes:
        evaluation = network.evaluate(scene.values)
        assert evaluation.stable.all()
        if "phase_margin" in load(name).offers:
            assert isfinite(float(stability.phase_margin(evaluation)[0]))


def _value(part: FoundPart) -> float:
    assert part.value is not None
    return part.value


@pytest.mark.parametrize("name", CIRCUITS)
def test_fixing_what_was_chosen_changes_nothing(name: str) -> None:
    """Every chosen value, put under [fixed], leads to the same parts."""
    result = sized(name)
    chosen = {part.ref: _value(part) for part in result.parts if part.value}
    units = {part.ref: part.unit for part in result.parts}
    lines = "\n".join(f'{ref} = "{value!r} {units[ref]}"' for ref, value in chosen.items())
    again = sized(name, ("", f"[fixed]\n{lines}"))
    assert {part.ref: part.value for part in again.parts if part.value} == pytest.approx(chosen)
