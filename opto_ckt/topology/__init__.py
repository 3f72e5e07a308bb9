"""A circuit's elements and nodes, with their places on the drawing; it never holds a value.

Values live in a flat mapping beside it: ``R1`` is the value of a resistor, capacitor or inductor,
``U1.gain_bandwidth`` a figure of a part. What a figure is called is what the part's record calls it.
"""

from __future__ import annotations

from opto_ckt.topology.element import (
    DOWN,
    GROUND,
    LEFT,
    OPEN,
    RIGHT,
    SHORT,
    UP,
    Element,
    Point,
    renamed,
)
from opto_ckt.topology.elements import (
    AnalogSwitch,
    BipolarTransistor,
    Capacitor,
    Comparator,
    Diode,
    FixedTia,
    Inductor,
    Jfet,
    Junction,
    LaserDiode,
    MonitoredLaser,
    OpAmp,
    Photodiode,
    Reference,
    Resistor,
    Supply,
    Switch,
    Terminal,
    Transistor,
    Trimmer,
    TwoTerminal,
)
from opto_ckt.topology.structure import (
    Topology,
)

__all__ = [
    "DOWN",
    "GROUND",
    "LEFT",
    "OPEN",
    "RIGHT",
    "SHORT",
    "UP",
    "AnalogSwitch",
    "BipolarTransistor",
    "Capacitor",
    "Comparator",
    "Diode",
    "Element",
    "FixedTia",
    "Inductor",
    "Jfet",
    "Junction",
    "LaserDiode",
    "MonitoredLaser",
    "OpAmp",
    "Photodiode",
    "Point",
    "Reference",
    "Resistor",
    "Supply",
    "Switch",
    "Terminal",
    "Topology",
    "Transistor",
    "Trimmer",
    "TwoTerminal",
    "renamed",
]
