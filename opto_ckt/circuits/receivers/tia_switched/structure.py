"""Elements, nodes and drawing of the switched feedback around the plain stage."""

from __future__ import annotations

from dataclasses import dataclass, replace

from opto_ckt.circuits.receivers.tia import structure as tia
from opto_ckt.request import SwitchedRequest
from opto_ckt.topology import AnalogSwitch, Capacitor, Element, Point, Resistor, Topology

LOWEST = 7.5  #: height of the first branch on the drawing, above R1 and C1


@dataclass(frozen=True)
class Branch:
    """Designators of what is put beside R1 and C1 in one range."""

    resistor: str
    capacitor: str
    switch: str
    node: str
    place: int  #: of its range, 0 the faintest, which has no branch

    @property
    def closed(self) -> str:
        """Name of the value that says whether its range is the one in use: 1, or 0."""
        return f"{self.switch}.closed"


def branches(request: SwitchedRequest) -> tuple[Branch, ...]:
    """One for every range but the faintest."""
    count = len(request.gain_ranges)
    return tuple(Branch(f"R{k + 3}", f"C{k + 3}", f"S{k}", f"branch{k}", k) for k in range(1, count))


def topology(request: SwitchedRequest) -> Topology:
    """The plain stage, and above its feedback a branch for every brighter range."""
    base = tia.topology(request)
    elements: list[Element] = []
    wires: list[tuple[Point, Point]] = []
    below = LOWEST - 1.5
    for branch in branches(request):
        height = LOWEST + 3.2 * (branch.place - 1)
        above = height + 1.5
        elements += [
            Resistor(branch.resistor, "sum", branch.node, role="feedback", at=(5, height), to=(7, height)),
            Capacitor(branch.capacitor, "sum", branch.node, role="feedback", at=(5, above), to=(7, above)),
            AnalogSwitch(branch.switch, branch.node, "amp", role="range", table="analog_switch",
                         at=(7, height), to=(9, height)),
        ]  # fmt: skip
        wires += [((5, below), (5, above)), ((7, height), (7, above)), ((9, below), (9, height))]
        below = height
    return replace(base, elements=(*base.elements, *elements), wires=(*base.wires, *_joined(wires)))


def _joined(wires: list[tuple[Point, Point]]) -> tuple[tuple[Point, Point], ...]:
    """Each wire once, those on the left from where the one before them ends."""
    return tuple(dict.fromkeys(wires))
