"""SPICE decks of a result: one analysis a file, numbers baked in, expected figures in comments."""

from __future__ import annotations

from collections.abc import Mapping
from math import ceil, floor, log10

import numpy as np

from opto_ckt.constants import ZERO_CELSIUS
from opto_ckt.outputs.linear_deck import loop_deck
from opto_ckt.outputs.pulse_deck import READ_OUT, pulse_deck
from opto_ckt.outputs.spice_models import cards
from opto_ckt.outputs.spice_text import card, comment, deck, fitting, number, title
from opto_ckt.result import DesignHead, Result, Scene
from opto_ckt.topology import (
    GROUND,
    LaserDiode,
    Led,
    MonitoredLaser,
    Photodiode,
    PulseSwitch,
    Topology,
    Transistor,
)
from opto_ckt.units import write

POINTS_AC = 50  #: a decade
POINTS_NOISE = 50  #: 50 points a decade integrate noise to 0.02 % by trapezoids
LONGEST_TAIL = 2000.0  #: rise times after which a step is cut: simulators give up on more points
STEP = 0.01  #: height of the step of light, as a share of it
FAINT = 1e-6  #: light that stands for the resting one in a scene without any [W]
SMALL_STEP = 2e-4  #: of the set voltage: small enough for what is not linear
MARK = "* written by opto-ckt; it is overwritten when the design is sized again\n"


def decks(result: Result) -> dict[str, str]:
    """Every deck of the nominal scene by file name."""
    scene = result.scenes[0]
    return {f"{result.head.stem}.{kind}.cir": deck_of(result, scene, kind) for kind in kinds(result.topology)}


def kinds(topology: Topology) -> tuple[str, ...]:
    """Which decks there are: a loop deck of a circuit with a loop of its own, a pulse deck of one that gives pulses."""
    more = {"loop": topology.loop, "pulse": topology.trigger}
    return ("ac", "noise", "step", *(kind for kind, there in more.items() if there))


def deck_of(result: Result, scene: Scene, kind: str) -> str:
    """One deck: ``ac`` (operating point and frequency response), ``noise``, ``step``, ``loop`` or ``pulse``."""
    if kind == "loop":
        return loop_deck(result, scene, head(result.head, scene, kind) + _expected(result, scene, kind), ac_span(scene))
    if kind == "pulse":
        lines = head(result.head, scene, kind) + _expected(result, scene, kind)
        return pulse_deck(result, scene, lines, _temperature(scene))
    circuit = _circuit(result.topology, scene.values, _pulse(result.topology, scene) if kind == "step" else "")
    observed = output_node(result.topology)
    analysis = {
        "ac": lambda: card(".op") + card(".ac dec", str(POINTS_AC), *map(number, ac_span(scene))),
        "noise": lambda: card(
            f".noise v({observed})", source(result.topology), "dec", str(POINTS_NOISE), *map(number, noise_span(result))
        ),
        "step": lambda: _transient(scene),
    }[kind]()
    lines = head(result.head, scene, kind) + _expected(result, scene, kind)
    return deck([*lines, circuit, _temperature(scene), analysis])


def head(design: DesignHead, scene: Scene, kind: str) -> list[str]:
    """Title and origin."""
    return [
        title(design.title, f"rev {design.revision}" if design.revision else "", design.circuit, kind, scene.name),
        MARK,
        comment(f"design {design.digest}"),
        comment(f"scene: {scene.name}"),
    ]


def is_linear(topology: Topology) -> bool:
    """Whether no element is modelled by its large-signal law."""
    return not any(isinstance(element, Transistor | LaserDiode | Led | PulseSwitch) for element in topology)


def source(topology: Topology) -> str:
    """Name of the source that the signal enters through."""
    return "vpw" if isinstance(topology[topology.input], Photodiode) else "vsig"


def step_share(topology: Topology) -> float:
    """Height of the step, as a share of what steps."""
    return STEP if source(topology) == "vpw" else SMALL_STEP


def output_node(topology: Topology) -> str:
    """Node at which the answer is read, against ground."""
    positive, negative = topology.output
    return positive if negative == GROUND else "obs"


def ac_span(scene: Scene) -> tuple[float, float]:
    """Whole decades from far below to far beyond the bandwidth."""
    widths = [1 / (3 * width) for width in (scene.expected.get("pulse_width"),) if width]
    middle = scene.expected.get("bandwidth") or scene.expected.get("loop_bandwidth") or next(iter(widths), 1e6)
    decade = floor(log10(middle)) if np.isfinite(middle) and middle > 0 else 6
    low = scene.expected.get("low_cutoff", np.nan)
    first = floor(log10(low)) - 1 if np.isfinite(low) and low > 0 else decade
    return 10.0 ** min(decade - 4, first), 10.0 ** (decade + 3)


def noise_span(result: Result) -> tuple[float, float]:
    """Whole decades that cover the noise band."""
    low, high = result.noise_band
    return 10.0 ** floor(log10(low)), 10.0 ** ceil(log10(high))


def step_times(scene: Scene) -> tuple[float, float, float]:
    """Start of the step, end of the run and largest time step: by the rise time expected, and by a slower tail.

    The sag of a circuit that does not pass DC is no tail to wait for.
    """
    rise = scene.expected.get("rise_time", 1e-6)
    rise = rise if np.isfinite(rise) and rise > 0 else 1e-6
    passes_dc = not np.isfinite(scene.expected.get("low_cutoff", np.nan))
    tail = float(np.nan_to_num(scene.expected.get("settling_time", 0.0))) if passes_dc else 0.0
    return rise, rise + min(max(30 * rise, tail), LONGEST_TAIL * rise), rise / 60


def _circuit(topology: Topology, values: Mapping[str, float], pulse: str) -> str:
    called = [cards(element, values, element.ref == topology.input) for element in topology]
    text = "".join(each.subcircuit for each in called) + "".join(each.calls for each in called)
    positive, negative = topology.output
    if negative != GROUND:
        text += comment("read-out of the answer against ground")
        text += card("eobs", "obs 0", positive, negative, "1") + card("robs", "obs 0", "1e6")
    return fitting(text.replace(" @pulse@", f" {pulse}" if pulse else ""))


def _pulse(topology: Topology, scene: Scene) -> str:
    start, end, longest = step_times(scene)
    rest, height = _rest(topology, scene), step_height(topology, scene)
    times = (start, longest / 10, longest / 10, 10 * end, 20 * end)
    return f"pulse({number(rest)} {number(rest + height)} {' '.join(number(t) for t in times)})"


def _rest(topology: Topology, scene: Scene) -> float:
    return scene.values["signal.power"] if source(topology) == "vpw" else 0.0


def step_height(topology: Topology, scene: Scene) -> float:
    """By how much the input steps. [W or V]"""
    return step_share(topology) * (_rest(topology, scene) or abs(scene.values.get("set_voltage", FAINT)))


def _transient(scene: Scene) -> str:
    _, end, longest = step_times(scene)
    return card(".tran", number(longest), number(end), "0", number(longest))


def _temperature(scene: Scene) -> str:
    """Noise and junctions hold at the scene's own temperature.

    reltol settles junctions finer than noise needs; gmin keeps what a simulator adds across a clamp, and the shot noise
    of that, far below the currents of faint light.
    """
    celsius = number(round(scene.values["temperature"] - ZERO_CELSIUS, 6))
    return card(".options", f"temp={celsius}", f"tnom={celsius}", "reltol=1e-6", "gmin=1e-15")


def _expected(result: Result, scene: Scene, kind: str) -> list[str]:
    """What the run ought to show, as predicted."""
    found, node, input_name = scene.expected, output_node(result.topology), source(result.topology)
    units = {figure.name: figure.unit for figure in result.figures}

    def figure(figure_name: str, words: str) -> str:
        if figure_name not in found or figure_name not in units:
            return ""
        return comment(f"expect {words}: {write(found[figure_name], units[figure_name], digits=5)}")

    optical = isinstance(result.topology[result.topology.input], Photodiode)
    lines = {
        "ac": [
            comment(f"answer: v({node}) for 1 {'W of light' if optical else 'V of signal'} ({input_name})"),
            figure("bandwidth", "-3 dB frequency"),
            figure("low_cutoff", "lower -3 dB frequency"),
            figure("peaking", "peaking"),
            figure("current", "current through the sense resistor"),
        ],
        "noise": [
            *_noise_lines(result, scene, optical),
            figure("output_noise", "output noise in the band, rms"),
        ],
        "step": [
            comment(f"step of {number(100 * step_share(result.topology))} per cent; answer: v({node})"),
            "" if result.topology.trigger else figure("rise_time", "rise time, 10-90 per cent"),
            figure("overshoot", "overshoot, as a share of the step"),
        ],
        "loop": [
            comment(f"small-signal circuit at the operating point, loop opened at {_opening(result.topology)}"),
            comment("answer: v(ret), return ratio with the sign of negative feedback at dc"),
            figure("phase_margin", "phase margin where |v(ret)| = 1"),
        ],
    }
    if kind == "pulse":
        return [
            comment(f"answer: v({READ_OUT}), the current in amperes as volts, from the rise of the trigger on"),
            figure("peak_current", "peak"),
            figure("pulse_width", "width at half of it"),
            figure("rise_time", "rise time, 10-90 per cent of it"),
        ]
    at_rest = [comment(f"expect v({node}) at rest: {write(v, 'V', digits=5)}") for node, v in levels(scene, kind)]
    return [*lines[kind], *at_rest]


def _opening(topology: Topology) -> str:
    """Where the loop is opened, in words."""
    watched = any(isinstance(element, MonitoredLaser) and element.ref == topology.loop for element in topology)
    return "the monitor's current" if watched else "the op amp's first stage"


def levels(scene: Scene, kind: str = "ac") -> list[tuple[str, float]]:
    """Nodes whose operating voltage is predicted."""
    if kind != "ac":
        return []
    return [(key.removeprefix("node."), value) for key, value in scene.values.items() if key.startswith("node.")]


def _noise_lines(result: Result, scene: Scene, optical: bool) -> list[str]:
    frequency = result.noise_frequency
    lines = [comment("onoise is in V/√Hz in some simulators and in V²/Hz in others: both are given")]
    density = scene.expected.get("output_noise_density")
    if density is not None:
        at = write(frequency, "Hz")
        lines.append(comment(f"expect onoise at {at}: {number(density)} V/√Hz = {number(density**2)} V²/Hz"))
    referred = scene.expected.get("signal_noise_density")
    if referred is not None:
        what = "W/√Hz, the NEP at the light of this deck" if optical else "V/√Hz at the set voltage"
        lines.append(comment(f"expect inoise at {write(frequency, 'Hz')}: {number(referred)} {what}"))
    return lines
