"""What was found for one design: verdict, figures, parts, noise, heat, faults, and all that outputs need."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Literal

from opto_ckt.derivation import Derivation
from opto_ckt.limits import Corner, Limits, Requirement
from opto_ckt.topology import Topology


@dataclass(frozen=True)
class DesignHead:
    """What the design file says of itself."""

    title: str
    revision: str
    circuit: str
    circuit_title: str
    digest: str  #: "sha256:..." of design and part files
    stem: str  #: names the files written


@dataclass(frozen=True)
class FoundFigure:
    """One figure over all corners."""

    name: str
    nominal: float
    low: float
    high: float
    at_low: Corner
    at_high: Corner
    unit: str  #: SI, as in JSON


@dataclass(frozen=True)
class FoundRequirement:
    """One bound, what was achieved and where the worst of it was found."""

    requirement: Requirement
    nominal: float
    worst: float
    at: Corner
    unit: str
    remedies: tuple[str, ...] = ()  #: what would have to move, and to what, if it is missed; any one serves

    @property
    def met(self) -> bool:
        """Whether the worst corner found keeps the bound."""
        return bool(self.requirement.margin(self.worst) >= 0)


@dataclass(frozen=True)
class FoundPart:
    """One part that an assembler fits: its value, why, and what it must stand."""

    ref: str
    kind: str  #: resistor, capacitor, op amp, ...
    role: str
    unit: str  #: Ω, F, H; empty for parts bought by name
    exact: float | None  #: None for parts bought by name
    value: float | None
    tolerance: float | None  #: relative
    absolute_tolerance: float | None  #: of small capacitors [F]
    characteristic: str  #: dielectric, temperature coefficient
    size: str
    part: str  #: maker's or file's name of a part bought by name
    stress: Mapping[str, float]  #: power [W], voltage [V], current [A], worst case
    required_rating: Mapping[str, float]  #: with derating
    formula: str  #: with numbers put in, or why the value was given
    source: str
    fitted: bool = True  #: False: the place stays empty (do not fit)


@dataclass(frozen=True)
class FoundNoise:
    """One generator's share of the output noise in the noise band."""

    generator: str
    output_rms: float  #: [V]
    share: float  #: of the total power


@dataclass(frozen=True)
class FoundHeat:
    """One part's worst dissipation and temperature."""

    ref: str
    power: float  #: [W]
    temperature: float  #: [K]
    limit: float  #: [K]
    at: Corner

    @property
    def ok(self) -> bool:
        """Whether the part stays within its limit."""
        return self.temperature <= self.limit


@dataclass(frozen=True)
class FoundFault:
    """One fault and what it does at its worst corner."""

    case: str
    result: str
    ok: bool
    light: float = 0.0  #: greatest that the source gives, at the plane of its sheet [W]


@dataclass(frozen=True)
class Rounding:
    """What going from exact to preferred values did to one figure, all else nominal."""

    figure: str
    exact: float
    preferred: float
    unit: str


@dataclass(frozen=True)
class Scene:
    """The circuit at one corner, complete enough to write its decks: every value after bias."""

    name: str  #: nominal, or the requirement whose worst corner this is
    corner: Corner
    values: Mapping[str, float]
    expected: Mapping[str, float]  #: figures predicted there


@dataclass(frozen=True)
class Alternative:
    """What another circuit would give for the same request with the same parts."""

    circuit: str
    verdict: str  #: in words
    figures: Mapping[str, float] = field(default_factory=dict)  #: a few, at nominal
    parts: int | None = None  #: that an assembler fits
    faults: tuple[int, int] | None = None  #: how many faults pass a limit, of how many


@dataclass(frozen=True)
class Result:
    """Everything found for one design; outputs are written from it alone."""

    head: DesignHead
    topology: Topology
    requirements: tuple[FoundRequirement, ...]
    figures: tuple[FoundFigure, ...]
    parts: tuple[FoundPart, ...]
    noise: tuple[FoundNoise, ...]
    heat: tuple[FoundHeat, ...]
    faults: tuple[FoundFault, ...]
    roundings: tuple[Rounding, ...]
    assumed: tuple[str, ...]
    cautions: tuple[str, ...]
    not_checked: tuple[str, ...]
    derivation: Derivation
    scenes: tuple[Scene, ...]  #: nominal first, then two corners
    noise_frequency: float  #: where densities are stated [Hz]
    noise_band: tuple[float, float]  #: [Hz]
    input_capacitance: Mapping[str, float] = field(default_factory=dict)  #: itemised, of the summing node [F]
    limits: Limits = field(default_factory=dict)  #: of every value, so that corners can be told in figures
    alternatives: tuple[Alternative, ...] = ()  #: where they were asked for

    @property
    def verdict(self) -> Literal["met", "missed", "none"]:
        """Whether every requirement is met at its worst corner; none where nothing was required."""
        if not self.requirements:
            return "none"
        return "met" if all(found.met for found in self.requirements) else "missed"

    def figure(self, name: str) -> FoundFigure:
        """One of the figures by name."""
        return next(figure for figure in self.figures if figure.name == name)
