"""Prediction beside simulation: every deck of every scene, run in an independent simulator."""

from __future__ import annotations

import json
from collections.abc import Iterator, Sequence
from dataclasses import asdict, dataclass

import numpy as np

from opto_ckt.analyses import noise, response, stability
from opto_ckt.analyses.network import Evaluation, Network
from opto_ckt.analyses.network.expansion import expand
from opto_ckt.outputs.pulse_deck import READ_OUT
from opto_ckt.outputs.readings import falls_to, integrated, phase_margin_of, pulse_of, rise_time_of, rises_to
from opto_ckt.outputs.simulators import Vectors, run
from opto_ckt.outputs.spice import deck_of, is_linear, kinds, levels, output_node, step_height, step_times
from opto_ckt.result import Result, Scene
from opto_ckt.units import percent, write

SPOTS = (1e-3, 0.1, 0.5, 1.0, 2.0)  #: where gain is compared, as multiples of the bandwidth
NOISE_SPOTS = (0.01, 0.1, 1.0)  #: where density is compared, as multiples of the top of the noise band
LEAST_LEVEL = 1e-3  #: levels below it are compared against it [V]


@dataclass(frozen=True)
class Bounds:
    """How far prediction and simulation may lie apart."""

    gain: float  #: [dB]
    density: float
    integrated: float
    bandwidth: float
    phase_margin: float  #: [°]
    level: float
    rise_time: float


LINEAR = Bounds(1e-4, 1e-4, 1e-3, 1e-3, 0.05, 5e-3, 1e-2)  #: decks of linear elements
DEVICES = Bounds(1e-2, 5e-3, 5e-3, 5e-3, 0.05, 5e-3, 1e-2)  #: decks with device models
PULSE = 1e-2  #: peak and width of a pulse: as rise times


@dataclass(frozen=True)
class Row:
    """One quantity of one scene."""

    scene: str
    quantity: str
    predicted: float
    simulated: float
    unit: str
    deviation: float  #: relative, or in the unit of the bound
    bound: float
    bound_unit: str  #: "" for a share, dB or °

    @property
    def ok(self) -> bool:
        """Whether the two agree within the bound."""
        return bool(abs(self.deviation) <= self.bound)


def crosscheck(result: Result, engine: str) -> list[Row]:
    """Run the decks of nominal and of two corners and compare.

    Raises
    ------
    OutsideProgramError : the engine is missing or fails.
    """
    network = Network(expand(result.topology))
    bounds = LINEAR if is_linear(result.topology) else DEVICES
    rows: list[Row] = []
    for scene in result.scenes:
        evaluation = network.evaluate(scene.values)
        runs = {kind: run(deck_of(result, scene, kind), engine) for kind in kinds(result.topology)}
        rows += _levels(result, scene, runs["ac"]["op"], bounds)
        rows += _response(result, scene, evaluation, runs["ac"]["ac"], bounds)
        rows += _noise(result, scene, evaluation, runs["noise"]["noise"], bounds)
        rows += _loop(scene, evaluation, runs["loop"]["ac"], bounds) if "loop" in runs else ()
        rows += _step(result, scene, evaluation, runs["step"]["tran"], bounds)
        rows += _pulse(scene, runs["pulse"]["tran"]) if "pulse" in runs else ()
    return rows


def _levels(result: Result, scene: Scene, plot: Vectors, bounds: Bounds) -> Iterator[Row]:
    """Every level predicted; of an answer between two nodes the difference too, which their levels would hide."""
    known = dict(levels(scene))
    positive, negative = result.topology.output
    if positive in known and negative in known:
        known[output_node(result.topology)] = known[positive] - known[negative]
    for node, predicted in known.items():
        if f"v({node})" in plot:
            simulated = float(plot[f"v({node})"][0])
            share = (simulated - predicted) / max(abs(predicted), LEAST_LEVEL)
            yield Row(scene.name, f"level of {node}", predicted, simulated, "V", share, bounds.level, "")


def _response(result: Result, scene: Scene, evaluation: Evaluation, plot: Vectors, bounds: Bounds) -> Iterator[Row]:
    frequency, answer = plot["frequency"], np.abs(plot[f"v({output_node(result.topology)})"])
    midband, reference = _midband(scene), _reference(scene, evaluation)
    if midband is None:  # the gain at DC is not in the sweep: both are referred to its first frequency
        reference = abs(complex(response.transfer_at(evaluation, frequency[0])[0]))
    corner = float(response.bandwidth(evaluation, reference)[0])
    middle = corner if np.isfinite(corner) else float(np.sqrt(frequency[0] * frequency[-1]))
    for index in _nearest(frequency, [middle * spot for spot in SPOTS]):
        predicted = abs(complex(response.transfer_at(evaluation, frequency[index])[0]))
        apart = 20 * float(np.log10(answer[index] / predicted))
        at = write(float(frequency[index]), "Hz")
        yield Row(scene.name, f"gain at {at}", predicted, float(answer[index]), "1", apart, bounds.gain, "dB")
    passed = float(answer[0] if midband is None else answer[_nearest(frequency, [midband])[0]])
    if np.isfinite(corner):
        above = slice(None) if midband is None else frequency >= midband
        simulated = falls_to(frequency[above], answer[above], passed * 0.5**0.5)
        yield _share(scene, "-3 dB frequency", corner, simulated, "Hz", bounds.bandwidth)
    if midband is not None and reference is not None:
        predicted = float(response.low_cutoff(evaluation, reference)[0])
        simulated = rises_to(frequency, answer, passed * 0.5**0.5)
        yield _share(scene, "lower -3 dB frequency", predicted, simulated, "Hz", bounds.bandwidth)


def _midband(scene: Scene) -> float | None:
    """Frequency at which gain is stated where DC does not pass; None where it does. [Hz]"""
    low = scene.expected.get("low_cutoff", np.nan)
    return float(np.sqrt(low * scene.expected["bandwidth"])) if np.isfinite(low) and low > 0 else None


def _reference(scene: Scene, evaluation: Evaluation) -> float | None:
    """Magnitude of the gain there. [V per unit of input]"""
    midband = _midband(scene)
    return None if midband is None else abs(complex(response.transfer_at(evaluation, midband)[0]))


def _noise(result: Result, scene: Scene, evaluation: Evaluation, plot: Vectors, bounds: Bounds) -> Iterator[Row]:
    frequency, density = plot["frequency"], plot["onoise"]
    top = result.noise_band[1]
    spots = _nearest(frequency, [result.noise_frequency, *(top * spot for spot in NOISE_SPOTS)])
    for index in spots:
        predicted = float(np.sqrt(noise.output_density(evaluation, frequency[index])[0]))
        at = write(float(frequency[index]), "Hz")
        yield _share(scene, f"output noise at {at}", predicted, float(density[index]), "V/√Hz", bounds.density)
    referred = float(np.sqrt(noise.signal_density(evaluation, frequency[spots[0]])[0]))
    unit = "W/√Hz" if "signal.power" in scene.values else "V/√Hz"
    name = f"input noise at {write(float(frequency[spots[0]]), 'Hz')}"
    yield _share(scene, name, referred, float(plot["inoise"][spots[0]]), unit, bounds.density)
    total = float(noise.output_rms(evaluation, result.noise_band)[0])
    simulated = integrated(frequency, density, *result.noise_band)
    yield _share(scene, "output noise in the band", total, simulated, "V", bounds.integrated)


def _loop(scene: Scene, evaluation: Evaluation, plot: Vectors, bounds: Bounds) -> Iterator[Row]:
    predicted = float(stability.phase_margin(evaluation)[0])
    if np.isfinite(predicted):
        crossing, margin = phase_margin_of(plot["frequency"], plot["v(ret)"])
        crossover = float(stability.crossover_frequency(evaluation)[0])
        yield _share(scene, "loop crossover", crossover, crossing, "Hz", bounds.bandwidth)
        apart = margin - predicted
        yield Row(scene.name, "phase margin", predicted, margin, "°", apart, bounds.phase_margin, "°")


def _step(result: Result, scene: Scene, evaluation: Evaluation, plot: Vectors, bounds: Bounds) -> Iterator[Row]:
    reference = _reference(scene, evaluation)
    predicted = float(response.rise_time(evaluation, reference)[0])
    start, end, _ = step_times(scene)
    if reference is None and scene.expected.get("settling_time", 0.0) > end - start:  # the run ends before the tail
        reference = abs(float(response.dc_gain(evaluation)[0]))
    if np.isfinite(predicted):
        height = None if reference is None else reference * step_height(result.topology, scene)
        simulated = rise_time_of(plot["time"], plot[f"v({output_node(result.topology)})"], height)
        yield _share(scene, "rise time", predicted, simulated, "s", bounds.rise_time)


def _pulse(scene: Scene, plot: Vectors) -> Iterator[Row]:
    found, expected = pulse_of(plot["time"], plot[f"v({READ_OUT})"]), scene.expected
    yield _share(scene, "peak of the pulse", expected["peak_current"], found.peak, "A", PULSE)
    yield _share(scene, "width of the pulse", expected["pulse_width"], found.width, "s", PULSE)


def _share(scene: Scene, quantity: str, predicted: float, simulated: float, unit: str, bound: float) -> Row:
    return Row(scene.name, quantity, predicted, simulated, unit, simulated / predicted - 1, bound, "")


def _nearest(frequency: Vectors | np.ndarray, wanted: Sequence[float]) -> list[int]:
    """Indices of the simulated frequencies next to those wanted, each once."""
    distances = [np.abs(np.log(np.asarray(frequency) / each)) for each in wanted]
    return list(dict.fromkeys(int(np.argmin(distance)) for distance in distances))


def crosscheck_table(rows: Sequence[Row]) -> str:
    """Aligned table, a block a scene, at most 100 columns."""
    lines: list[str] = []
    for scene in dict.fromkeys(row.scene for row in rows):
        lines += ["", f"{scene}"] if lines else [scene]
        lines.append(f"  {'':<28}{'predicted':>16}{'simulated':>16}{'apart':>14}{'bound':>12}")
        for row in rows:
            if row.scene == scene:
                apart, bound = _said(row.deviation, row), _said(row.bound, row)
                predicted, simulated = _value(row.predicted, row), _value(row.simulated, row)
                mark = "ok" if row.ok else "APART"
                lines.append(f"  {row.quantity:<28}{predicted:>16}{simulated:>16}{apart:>14}{bound:>12}  {mark}")
    apart_rows = sum(not row.ok for row in rows)
    verdict = "all agree within their bounds" if not apart_rows else f"{apart_rows} apart by more than their bounds"
    return "\n".join([*lines, "", f"{len(rows)} compared, {verdict}", ""])


def _value(value: float, row: Row) -> str:
    return f"{value:.6g}" if row.unit == "1" else write(value, row.unit, digits=6)


def _said(value: float, row: Row) -> str:
    return f"{value:.2g} {row.bound_unit}" if row.bound_unit else percent(value, digits=2)


def to_json(rows: Sequence[Row]) -> str:
    """The rows as JSON, SI units."""
    records = [{**asdict(row), "ok": row.ok} for row in rows]
    return json.dumps({"schema": 1, "rows": records}, ensure_ascii=False, indent=1, allow_nan=False) + "\n"
