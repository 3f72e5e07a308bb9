"""The kinds of elements that circuits are made of."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import ClassVar

from opto_ckt.topology.element import OPEN, SHORT, Element, Point


@dataclass(frozen=True)
class TwoTerminal(Element):
    """An element between two nodes."""

    a: str
    b: str
    pins: ClassVar[tuple[str, ...]] = ("a", "b")


class Resistor(TwoTerminal):
    """A resistor; its value [Ω] is named like itself."""

    kind: ClassVar[str] = "resistor"
    stocked: ClassVar[str] = "resistors"
    faults: ClassVar[Mapping[str, Mapping[str, float]]] = {"open": {"": OPEN}, "short": {"": SHORT}}


class Trimmer(TwoTerminal):
    """A trimming resistor wired as a rheostat, wiper to one end, so that an open wiper leaves its whole track.

    Its track [Ω] is named like itself; what it is set to is its ``setting``.
    """

    kind: ClassVar[str] = "trimmer"
    stocked: ClassVar[str] = "trimmers"
    figures: ClassVar[tuple[str, ...]] = ("setting",)


class Capacitor(TwoTerminal):
    """A capacitor; its value [F] is named like itself."""

    kind: ClassVar[str] = "capacitor"
    stocked: ClassVar[str] = "capacitors"


class Inductor(TwoTerminal):
    """An inductor; its value [H] is named like itself."""

    kind: ClassVar[str] = "inductor"
    stocked: ClassVar[str] = "inductors"
    figures: ClassVar[tuple[str, ...]] = ("resistance",)
    absent: ClassVar[Mapping[str, float]] = {"resistance": SHORT}


class AnalogSwitch(TwoTerminal):
    """One contact of an analog switch, by what it is in its position; ``a`` is the end that its leakage comes from."""

    kind: ClassVar[str] = "analog switch"
    figures: ClassVar[tuple[str, ...]] = ("resistance", "capacitance", "terminal_capacitance", "leak")


@dataclass(frozen=True)
class Junction(Element):
    """An element with an anode and a cathode."""

    anode: str
    cathode: str
    pins: ClassVar[tuple[str, ...]] = ("anode", "cathode")


class Diode(Junction):
    """A diode that is reverse biased in normal use."""

    kind: ClassVar[str] = "diode"
    figures: ClassVar[tuple[str, ...]] = ("capacitance",)
    absent: ClassVar[Mapping[str, float]] = {"capacitance": 1e-15}


class Photodiode(Junction):
    """A photodiode; light on it is an input of the circuit, in watts."""

    kind: ClassVar[str] = "photodiode"
    figures: ClassVar[tuple[str, ...]] = (
        "responsivity", "capacitance", "series_resistance", "shunt_resistance", "transit_frequency",
        "dark_current", "ambient_current", "signal_current", "dark_shot", "ambient_shot", "signal_shot",
    )  # fmt: skip
    absent: ClassVar[Mapping[str, float]] = {
        "series_resistance": SHORT,
        "shunt_resistance": 1e15,
        "transit_frequency": 1e15,
    }
    faults: ClassVar[Mapping[str, Mapping[str, float]]] = {"open": {"responsivity": 0.0}}


@dataclass(frozen=True)
class OpAmp(Element):
    """A voltage-feedback operational amplifier with two poles, output resistance, input capacitance and noise."""

    plus: str
    minus: str
    out: str
    positive: str = "positive"  #: supply pins
    negative: str = "negative"
    kind: ClassVar[str] = "op amp"
    pins: ClassVar[tuple[str, ...]] = ("plus", "minus", "out", "positive", "negative")
    pin_places: ClassVar[Mapping[str, Point]] = {
        "minus": (0, 0.5), "plus": (0, -0.5), "out": (2, 0), "positive": (1, 1), "negative": (1, -1),
    }  # fmt: skip
    figures: ClassVar[tuple[str, ...]] = (
        "gain_bandwidth", "second_pole", "open_loop_gain", "common_capacitance", "differential_capacitance",
        "output_resistance", "voltage_noise", "voltage_noise_corner", "current_noise", "current_noise_corner",
    )  # fmt: skip
    absent: ClassVar[Mapping[str, float]] = {
        "second_pole": 1e15,
        "output_resistance": SHORT,
        "voltage_noise_corner": 1e-9,
        "current_noise_corner": 1e-9,
    }

    def pin_points(self) -> dict[str, Point]:
        """Where each pin lies on the drawing; mirrored, the inputs change places and the supply pins stay."""
        points = super().pin_points()
        if self.flipped:
            points["positive"], points["negative"] = points["negative"], points["positive"]
        return points


class Comparator(OpAmp):
    """A comparator: to small signals its input capacitances, and an output that rests at one of its levels."""

    kind: ClassVar[str] = "comparator"
    figures: ClassVar[tuple[str, ...]] = ("common_capacitance", "differential_capacitance", "output_resistance")
    absent: ClassVar[Mapping[str, float]] = {"output_resistance": 50.0}


@dataclass(frozen=True)
class FixedTia(Element):
    """A transimpedance amplifier bought whole: a current into its input, a voltage from its output, inverted.

    Two poles of a flat response stand for its bandwidth, whatever the source's capacitance up to what its sheet allows.
    """

    input: str
    out: str
    positive: str = "positive"
    negative: str = "negative"
    passes_dc: bool = True  #: no low cut-off
    kind: ClassVar[str] = "transimpedance amplifier"
    pins: ClassVar[tuple[str, ...]] = ("input", "out", "positive", "negative")
    pin_places: ClassVar[Mapping[str, Point]] = {
        "input": (0, 0), "out": (2, 0), "positive": (1, 1), "negative": (1, -1),
    }  # fmt: skip
    figures: ClassVar[tuple[str, ...]] = (
        "transimpedance", "bandwidth", "low_cutoff", "input_resistance", "input_noise_density", "output_resistance",
    )  # fmt: skip
    absent: ClassVar[Mapping[str, float]] = {"low_cutoff": 1.0, "input_resistance": 1.0, "input_noise_density": 1e-12}


@dataclass(frozen=True)
class Transistor(Element):
    """A transistor by its small-signal figures at the bias point; ``control`` is gate or base.

    ``table`` names its data sheet; ``polarity`` is +1 for n-channel and npn, -1 for p-channel and pnp.
    """

    drain: str  #: or collector
    control: str
    source: str  #: or emitter
    polarity: int = 1
    bipolar: bool = False  #: drawn as npn or pnp
    kind: ClassVar[str] = "transistor"
    pins: ClassVar[tuple[str, ...]] = ("drain", "control", "source")
    pin_places: ClassVar[Mapping[str, Point]] = {"control": (0, 0), "drain": (1, 1), "source": (1, -1)}
    figures: ClassVar[tuple[str, ...]] = (
        "transconductance", "input_conductance", "control_source_capacitance", "control_drain_capacitance",
        "output_conductance", "channel_noise_factor", "drain_current", "control_current",
    )  # fmt: skip


@dataclass(frozen=True)
class BipolarTransistor(Transistor):
    """A bipolar transistor with the resistance of its base, which makes noise."""

    bipolar: bool = True
    figures: ClassVar[tuple[str, ...]] = (*Transistor.figures, "base_resistance")
    absent: ClassVar[Mapping[str, float]] = {"base_resistance": SHORT}


@dataclass(frozen=True)
class Jfet(Transistor):
    """A junction field-effect transistor; its gate leaks."""


@dataclass(frozen=True)
class Switch(Element):
    """A small MOSFET that is fully off or fully on; off, only its capacitance is left."""

    drain: str
    control: str
    source: str
    polarity: int = 1
    kind: ClassVar[str] = "transistor"
    pins: ClassVar[tuple[str, ...]] = ("drain", "control", "source")
    pin_places: ClassVar[Mapping[str, Point]] = {"control": (0, 0), "drain": (1, 1), "source": (1, -1)}


@dataclass(frozen=True)
class PulseSwitch(Element):
    """A MOSFET that is fully on, by its resistance and capacitances; its gate starts a pulse."""

    drain: str
    control: str
    source: str
    kind: ClassVar[str] = "transistor"
    pins: ClassVar[tuple[str, ...]] = ("drain", "control", "source")
    pin_places: ClassVar[Mapping[str, Point]] = {"control": (0, 0), "drain": (1, 1), "source": (1, -1)}
    figures: ClassVar[tuple[str, ...]] = (
        "resistance", "input_capacitance", "reverse_capacitance", "output_capacitance",
    )  # fmt: skip
    absent: ClassVar[Mapping[str, float]] = {"output_capacitance": 1e-12}


class HeldCurrent(TwoTerminal):
    """What a capacitor gives at the instant at which small signals are looked at, from ``a`` to ``b``; no part."""

    kind: ClassVar[str] = "held current"


@dataclass(frozen=True)
class ClosedSwitch(Switch):
    """A transistor that is fully on: a resistance, of a bipolar one a drop besides; its control passes no signal."""

    bipolar: bool = False  #: drawn as npn or pnp
    figures: ClassVar[tuple[str, ...]] = ("on_resistance", "control_capacitance", "control_conductance")


class LaserDiode(Junction):
    """A laser diode by its series resistance and capacitance at the bias point."""

    kind: ClassVar[str] = "laser"
    figures: ClassVar[tuple[str, ...]] = ("series_resistance", "capacitance")
    absent: ClassVar[Mapping[str, float]] = {"capacitance": 1e-15}


@dataclass(frozen=True)
class MonitoredLaser(LaserDiode):
    """A laser diode with its monitor diode in one package: above threshold a share of its current comes back.

    ``monitor_gain`` is the monitor's current over that of the laser, ``monitor_shot`` the current that makes its noise.
    """

    monitor_cathode: str
    monitor_anode: str
    pins: ClassVar[tuple[str, ...]] = ("anode", "cathode", "monitor_cathode", "monitor_anode")
    pin_places: ClassVar[Mapping[str, Point]] = {
        "anode": (0, 2), "cathode": (0, 0), "monitor_cathode": (1.5, 2), "monitor_anode": (1.5, 0),
    }  # fmt: skip
    figures: ClassVar[tuple[str, ...]] = (
        "series_resistance", "capacitance", "monitor_gain", "monitor_capacitance", "monitor_shot",
    )  # fmt: skip


@dataclass(frozen=True)
class Led(Junction):
    """A light-emitting diode at its bias point: junction behind its series resistance, light behind its lifetime.

    The light is the voltage of a node of its own, a volt a watt.
    """

    light: str = "light"  #: node that carries the light
    kind: ClassVar[str] = "LED"
    figures: ClassVar[tuple[str, ...]] = (
        "series_resistance", "junction_resistance", "capacitance", "lifetime", "slope_efficiency", "current",
    )  # fmt: skip


@dataclass(frozen=True)
class LogicOutput(Element):
    """A logic output at one of its levels, behind the resistance that it has there."""

    out: str
    kind: ClassVar[str] = "logic output"
    pins: ClassVar[tuple[str, ...]] = ("out",)
    pin_places: ClassVar[Mapping[str, Point]] = {"out": (2, 0)}
    figures: ClassVar[tuple[str, ...]] = ("resistance",)


@dataclass(frozen=True)
class Reference(Element):
    """A two-terminal (shunt) voltage reference; an input of the circuit, in volts."""

    cathode: str
    anode: str
    kind: ClassVar[str] = "reference"
    pins: ClassVar[tuple[str, ...]] = ("cathode", "anode")
    figures: ClassVar[tuple[str, ...]] = ("output_resistance", "noise")
    absent: ClassVar[Mapping[str, float]] = {"output_resistance": 1.0, "noise": 0.0}
    faults: ClassVar[Mapping[str, Mapping[str, float]]] = {"missing": {"voltage": 0.0}}


@dataclass(frozen=True)
class Supply(Element):
    """A supply or bias rail against ground; ideal, so ground to small signals. Its value [V] is ``value``."""

    node: str
    value: str = ""  #: name of its value, such as ``supply.positive``
    kind: ClassVar[str] = "supply"
    pins: ClassVar[tuple[str, ...]] = ("node",)


@dataclass(frozen=True)
class Terminal(Element):
    """A named point where a signal enters or leaves the board."""

    node: str
    kind: ClassVar[str] = "terminal"
    pins: ClassVar[tuple[str, ...]] = ("node",)
    pin_places: ClassVar[Mapping[str, Point]] = {"node": (0, 0)}
