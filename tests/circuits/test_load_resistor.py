"""Load resistor: its forms, closed forms and published figures, noise of each generator, decks in both simulators."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from shutil import which

import numpy as np
import pytest

from opto_ckt.analyses import noise
from opto_ckt.analyses.network import Network
from opto_ckt.analyses.network.expansion import expand
from opto_ckt.analyses.response import transfer_at
from opto_ckt.analyses.symbolic import lcapy_transfer
from opto_ckt.constants import BOLTZMANN, ELEMENTARY_CHARGE
from opto_ckt.formulas import load_resistor
from opto_ckt.formulas.noise import thermal_current_noise
from opto_ckt.formulas.transit import corner_frequency
from opto_ckt.outputs.crosscheck import crosscheck
from opto_ckt.outputs.sheet import check_collisions
from opto_ckt.outputs.simulators import ENGINES as SIMULATORS
from opto_ckt.outputs.simulators import run
from opto_ckt.outputs.spice import deck_of
from opto_ckt.outputs.wiring import drawing_faults
from tests.circuits.sized import model, read, sized
from tests.near import near
from tests.published.printed import printed

ENGINES = [engine for engine in SIMULATORS if engine == "neospice" or which("ngspice")]

FAST = (
    ("gain_bandwidth ", 'gain_bandwidth = "900 MHz"'),
    ("second_pole ", 'second_pole = "1.5 GHz"'),
    ("capacitance  ", 'capacitance = { min = "8.8 pF", typ = "9 pF", max = "9.2 pF" }'),
    ("peaking ", 'peaking = { max = "2 dB" }'),
)
HIGH = (*FAST, ("front_end ", 'front_end = "high_impedance"'))
GAIN = (("output_swing ", 'transimpedance = { min = "10 kΩ" }'), ("gain_bandwidth ", 'gain_bandwidth = "900 MHz"'))
IDEAL = {"U1.gain_bandwidth": 1e14, "U1.second_pole": 1e15, "U1.output_resistance": 1e-3, "D1.series_resistance": 1e-3}
SINGLE = (
    ("supply ", 'supply = { positive = "5 V", tolerance = "5 %" }\ninput_level = "1.5 V"'),
    ("output  ", 'output = "anode"'),
    ("reverse_bias", 'reverse_bias = "3.5 V"'),
    ("capacitance_bias", 'capacitance_bias = "3.5 V"'),
)
FALLING = (
    ("supply ", 'supply = { positive = "5 V", tolerance = "5 %" }\ninput_level = "3.2 V"'),
    ("reverse_bias", 'reverse_bias = "3.2 V"'),
    ("output_swing", ""),
)
LEVEL = (
    ("supply ", 'supply = { positive = "5 V", negative = "-5 V", tolerance = "5 %" }\ninput_level = "1 V"'),
    ("reverse_bias", 'reverse_bias = "3 V"'),
)
UNBIASED = (("reverse_bias", 'reverse_bias = "0 V"'), ("output_swing", ""))
BY_NAME = {
    "low": (),
    "high": HIGH,
    "gain": GAIN,
    "anode": (("output  ", 'output = "anode"'),),
    "single": SINGLE,
    "single falling": FALLING,
    "single gain": (*SINGLE, *GAIN),
    "single high": (*SINGLE, *HIGH),
    "level": LEVEL,
    "unbiased": UNBIASED,
}
FORMS = pytest.mark.parametrize("changes", BY_NAME.values(), ids=BY_NAME)


@FORMS
def test_every_form_meets_its_requirements(changes: tuple[tuple[str, str], ...]) -> None:
    result = sized("load-resistor", *changes)
    assert result.verdict == "met", [row for row in result.requirements if not row.met]
    assert drawing_faults(result.topology) == []
    texts = {element.ref: (element.ref, "24.35 kΩ") for element in result.topology.fitted}
    assert check_collisions(result.topology, texts) == []


@FORMS
def test_network_agrees_with_lcapy_at_random_values(changes: tuple[tuple[str, str], ...]) -> None:
    found = model("load-resistor", *changes)
    random = np.random.default_rng(8)
    chosen = {"R1": 2e4, "R2": 3e4, "R3": 2e4, "R4": 4.5e3, "R5": 249.0, "C2": 1e-6, "C5": 50e-12}
    chosen |= dict.fromkeys(("C6", "C7", "C8", "C9"), 1e-7)
    fitted = {element.ref for element in found.topology.fitted}
    biased = found.biased(found.nominal() | {ref: value for ref, value in chosen.items() if ref in fitted})
    values = {
        name: float(np.asarray(biased[name])) * float(random.uniform(0.6, 1.6)) for name in sorted(found.network.inputs)
    }
    frequencies = np.geomspace(1e3, 1e8, 7)
    ours = transfer_at(found.network.evaluate(values), frequencies[:, None])[:, 0]
    np.testing.assert_allclose(lcapy_transfer(expand(found.topology), values, frequencies), ours, rtol=1e-6)


def test_bandwidth_into_a_load_is_that_of_one_pole() -> None:
    """G. Keiser, Optical Fiber Communications, Ex. 6.7: f = 1/(2π R C)."""
    found = model("load-resistor")
    values = found.nominal() | IDEAL | {"R1": 1e4, "C8": 1e-7, "C9": 1e-7}
    biased = found.biased(values)
    capacitance = float(biased["D1.capacitance"]) + values["U1.common_capacitance"] + values["CB"]
    expected = 1 / (2 * np.pi * 1e4 * capacitance)
    assert found.evaluate(values)["bandwidth"][0] == pytest.approx(expected, rel=2e-3)
    assert load_resistor.load_for_bandwidth(capacitance=capacitance, bandwidth=expected) == pytest.approx(1e4)


def test_keiser_6_7() -> None:
    """G. Keiser, Optical Fiber Communications, Ex. 6.7 (p. 239): 3 pF of the diode and 4 pF of the amplifier."""
    for load, figure in ((1e3, "23e6"), (50.0, "455e6")):
        assert corner_frequency(resistance=load, capacitance=7e-12) == printed(figure)
        back = load_resistor.load_for_bandwidth(
            capacitance=7e-12, bandwidth=corner_frequency(resistance=load, capacitance=7e-12)
        )
        assert back == near(load)


def test_wilson_hawkes_9_1() -> None:
    """J. Wilson & J. F. B. Hawkes, Optoelectronics, Ex. 9.1 (p. 449); printed 318.5 Ω is what π = 3.14 gives."""
    load = load_resistor.load_for_bandwidth(capacitance=1e-12, bandwidth=500e6)
    assert load == printed("318.31")
    assert load == near(318.5, rel=0.0006)


def test_senior_9_8() -> None:
    """J. M. Senior, Optical Fiber Communications, Ex. 9.8; what is given is from memory: 4 MΩ beside 4 MΩ, 6 pF, 300 K.

    1.33e4 Hz before equalising, thermal noise 13 dB below that of a transimpedance amplifier of 100 kΩ.
    """
    assert corner_frequency(resistance=2e6, capacitance=6e-12) == printed("1.33e4")
    loud, quiet = (thermal_current_noise(resistance=resistance, temperature=300.0) for resistance in (1e5, 2e6))
    assert 20 * np.log10(loud / quiet) == printed("13")


def test_equaliser_puts_a_zero_on_the_pole_of_the_input() -> None:
    """With an ideal amplifier load and equaliser together have one pole, that of the equaliser."""
    found = model("load-resistor", *HIGH)
    load, lower, gain = 2e4, 249.0, 19.0
    no_loads = {"U1.differential_capacitance": 1e-18, "U1.common_capacitance": 1e-18}
    base = found.nominal() | IDEAL | no_loads | {"C8": 1e-7, "C9": 1e-7}
    biased = found.biased(base | {"R1": load, "R4": 1.0, "R5": 1.0, "C5": 1e-12})
    capacitance = float(biased["D1.capacitance"]) + base["CB"]
    shaping = load_resistor.equaliser_capacitance(
        load_resistance=load, input_capacitance=capacitance, shunt=lower, gain=gain
    )
    figures = found.evaluate(base | {"R1": load, "R4": (gain - 1) * lower, "R5": lower, "C5": shaping})
    assert figures["bandwidth"][0] == pytest.approx(1 / (2 * np.pi * lower * shaping), rel=5e-3)
    lift = load_resistor.equaliser_gain(
        load_resistance=load, input_capacitance=capacitance, corner=1 / (2 * np.pi * lower * shaping)
    )
    assert lift == pytest.approx(gain, rel=1e-9)


def test_input_noise_agrees_with_the_closed_form() -> None:
    """Of a plain load at its own bandwidth, where e_n drives the capacitance as much as the load."""
    found = model("load-resistor")
    values = found.nominal() | IDEAL | {"R1": 2e4, "C8": 1e-7, "C9": 1e-7, "U1.differential_capacitance": 1e-20}
    biased = found.biased(values)
    density = noise.density_by_generator(found.evaluation(biased), 7e5)
    dark = sum(power[0] for name, power in density.items() if not name.startswith(("D1 signal", "D1 series")))
    gain = abs(transfer_at(found.evaluation(biased), 7e5)[0]) / biased["D1.responsivity"]
    expected = load_resistor.load_noise(
        load_resistance=1 / (1 / 2e4 + 1 / float(biased["D1.shunt_resistance"]) + 1 / values["RB"]),
        current=float(biased["D1.dark_current"] + biased["D1.ambient_current"]),
        temperature=values["temperature"],
        voltage_noise=values["U1.voltage_noise"] * (1 + values["U1.voltage_noise_corner"] / 7e5) ** 0.5,
        current_noise=values["U1.current_noise"],
        capacitance=float(biased["D1.capacitance"]) + values["U1.common_capacitance"] + values["CB"],
        frequency=7e5,
    )
    assert dark**0.5 / gain == pytest.approx(expected, rel=3e-4)


LOAD, UPPER, LOWER, SHAPING = 2e4, 4.5e3, 249.0, 45e-12
EQUALISER = {"R1": LOAD, "R4": UPPER, "R5": LOWER, "C5": SHAPING, "C8": 1e-7, "C9": 1e-7}
Closed = Callable[[dict[str, float], complex, complex, complex], float]
GENERATORS: dict[str, Closed] = {
    "R1 thermal": lambda v, z, h, foot: 4 * BOLTZMANN * v["temperature"] / LOAD * abs(z * h) ** 2,
    "R4 thermal": lambda v, z, h, foot: 4 * BOLTZMANN * v["temperature"] * UPPER,
    "R5 thermal": lambda v, z, h, foot: 4 * BOLTZMANN * v["temperature"] * LOWER * abs(UPPER / foot) ** 2,
    "U1 voltage": lambda v, z, h, foot: v["en2"] * abs(h) ** 2,
    "U1 current": lambda v, z, h, foot: v["U1.current_noise"] ** 2 * UPPER**2,
    "U1 current, + input": lambda v, z, h, foot: v["U1.current_noise"] ** 2 * abs(z * h) ** 2,
    "D1 dark shot": lambda v, z, h, foot: 2 * ELEMENTARY_CHARGE * v["D1.dark_current"] * abs(z * h) ** 2,
    "D1 ambient shot": lambda v, z, h, foot: 2 * ELEMENTARY_CHARGE * v["D1.ambient_current"] * abs(z * h) ** 2,
    "D1 signal shot": lambda v, z, h, foot: 2 * ELEMENTARY_CHARGE * v["D1.signal_current"] * abs(z * h) ** 2,
}
"""Output noise density of each generator around an ideal amplifier: z of the load, h of the equaliser, its foot."""


@pytest.mark.parametrize("frequency", [1e4, 1e6, 2e7])
@pytest.mark.parametrize("generator", GENERATORS)
def test_each_generator_of_the_equaliser_agrees_with_its_closed_form(generator: str, frequency: float) -> None:
    found = model("load-resistor", *HIGH)
    quiet = {"U1.differential_capacitance": 1e-20, "U1.common_capacitance": 1e-20, "U1.open_loop_gain": 1e9}
    biased = {k: float(np.asarray(v)) for k, v in found.biased(found.nominal() | IDEAL | quiet | EQUALISER).items()}
    s = 2j * np.pi * frequency
    admittance = 1 / LOAD + 1 / biased["D1.shunt_resistance"] + 1 / biased["RB"]
    z = 1 / (admittance + s * (biased["D1.capacitance"] + biased["CB"]))
    foot = LOWER + 1 / (s * SHAPING)
    biased["en2"] = biased["U1.voltage_noise"] ** 2 * (1 + biased["U1.voltage_noise_corner"] / frequency)
    ours = noise.density_by_generator(found.evaluation(biased), frequency)[generator][0]
    assert ours == near(GENERATORS[generator](biased, z, 1 + UPPER / foot, foot), rel=2e-4)


SILENT = 1e-40  #: so little noise that a deck leaves its generator out
DARK = {"D1.ambient_shot": 0.0, "D1.signal_shot": 0.0, "D1.dark_shot": 0.0}
QUIET = {"U1.voltage_noise": SILENT, "U1.current_noise": SILENT, **DARK}
DROWNING = {
    "R1 thermal": ("high", QUIET, 0.1),
    "R4 thermal": ("high", {**QUIET, "R1": 1e-2}, 0.1),
    "R5 thermal": ("high", {**QUIET, "R1": 1e-2}, 1.0),
    "U1 voltage": ("high", {**QUIET, "U1.voltage_noise": 1e-6}, 0.1),
    "U1 current": ("high", {**QUIET, "R1": 1e-2, "U1.current_noise": 5e-11}, 0.1),
    "U1 current, + input": ("high", {**QUIET, "U1.current_noise": 5e-11}, 0.1),
    "D1 signal shot": ("high", {**QUIET, "D1.signal_shot": 1e-2}, 0.1),
    "D1 dark shot": ("high", {**QUIET, "D1.dark_shot": 1e-2}, 0.1),
    "D1 ambient shot": ("high", {**QUIET, "D1.ambient_shot": 1e-2}, 0.1),
    "U2 voltage": ("single", {**QUIET, "U2.voltage_noise": 1e-6, "U2.current_noise": SILENT}, 0.1),
    "U2 current, + input": (
        "single",
        {**QUIET, "U2.voltage_noise": SILENT, "U2.current_noise": 1e-9, "C2": 1e-15},
        0.1,
    ),
}
"""Generator -> form, values that let it drown the others, and where, as a share of the top of the noise band."""


@pytest.mark.parametrize("engine", ENGINES)
@pytest.mark.parametrize("generator", DROWNING)
def test_each_generator_by_itself_in_a_simulator(generator: str, engine: str) -> None:
    form, changed, share = DROWNING[generator]
    result = sized("load-resistor", *BY_NAME[form])
    scene = replace(result.scenes[0], values={**result.scenes[0].values, **changed})
    plot = run(deck_of(result, scene, "noise"), engine)["noise"]
    index = int(np.argmin(np.abs(plot["frequency"] - share * result.noise_band[1])))
    evaluation = Network(expand(result.topology)).evaluate(scene.values)
    parts = noise.density_by_generator(evaluation, plot["frequency"][index])
    total = sum(float(power[0]) for power in parts.values())
    assert float(parts[generator][0]) > 0.5 * total
    assert float(plot["onoise"][index]) == pytest.approx(np.sqrt(total), rel=1e-5)


@pytest.mark.parametrize(("output", "sign"), [("cathode", -1), ("anode", 1)])
def test_output_follows_the_node_of_the_load(output: str, sign: int) -> None:
    found = model("load-resistor", ("output  ", f'output = "{output}"'))
    values = found.biased(found.nominal() | {"R1": 1e4, "C8": 1e-7, "C9": 1e-7, "U1.offset_voltage": 0.0})
    light = (
        values["D1.responsivity"] * values["signal.power"] + values["D1.ambient_current"] + values["D1.dark_current"]
    )
    assert values["node.amp"] == pytest.approx(sign * light * 1e4, rel=2e-3)
    assert values["detector.reverse_bias"] == pytest.approx(5 - light * 1e4, rel=1e-6)


@pytest.mark.parametrize("engine", ENGINES)
@FORMS
def test_decks_agree(changes: tuple[tuple[str, str], ...], engine: str) -> None:
    """Levels, gain, noise, loop and step at nominal and at two corners."""
    result = sized("load-resistor", *changes)
    rows = crosscheck(result, engine)
    assert len({row.scene for row in rows}) == len(result.scenes) == 3
    assert [row for row in rows if not row.ok] == []


def test_the_design_of_a_tia_is_read_by_changing_one_line() -> None:
    assert read("tia", ("circuit ", 'circuit = "load-resistor"')).request.circuit == "load-resistor"
