"""Bill of materials: one line for each purchasable part of one design, or of several together."""

from __future__ import annotations

import re
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass

from opto_ckt.outputs.ratings import LOAD_UNITS, tolerance_text, value_text
from opto_ckt.preferred import POWER_RATINGS
from opto_ckt.result import DesignHead, FoundPart, Result
from opto_ckt.units import UnitError, write_rkm

SLACK = 1 + 1e-9  #: a rating that equals what is needed will do


@dataclass(frozen=True)
class Place:
    """Where one part sits."""

    design: str  #: stem of the design
    ref: str
    role: str


@dataclass(frozen=True)
class BomLine:
    """One purchasable part and every place where it sits."""

    kind: str
    value: str  #: as engineers write it; the name of a part bought by name
    code: str  #: IEC 60062; empty where there is none
    tolerance: str
    characteristic: str
    size: str
    required_rating: Mapping[str, float]  #: the largest that any of its places asks for
    stress: Mapping[str, float]  #: the worst of all places
    part_number: str  #: of a part bought by name
    fitted: bool
    places: tuple[Place, ...]

    @property
    def functions(self) -> tuple[str, ...]:
        """What it is there for, each only once."""
        return tuple(dict.fromkeys(place.role for place in self.places if place.role))


@dataclass(frozen=True)
class Bom:
    """The lines of all designs, for a number of boards of each."""

    designs: Mapping[str, DesignHead]  #: by the name under which places refer to them
    lines: tuple[BomLine, ...]
    boards: int

    def quantity(self, line: BomLine) -> int:
        """Pieces to buy; none of a part whose place stays empty."""
        return len(line.places) * self.boards if line.fitted else 0

    def references(self, line: BomLine) -> str:
        """Designators in order, behind the name of their design where there are several."""
        designs = dict.fromkeys(place.design for place in line.places)
        lists = {
            design: ", ".join(sorted((p.ref for p in line.places if p.design == design), key=in_order))
            for design in designs
        }
        if len(self.designs) == 1:
            return "".join(lists.values())
        return "; ".join(f"{design} {refs}" for design, refs in lists.items())


def bill_of_materials(results: Sequence[Result], boards: int = 1) -> Bom:
    """Merge the parts of all designs; two parts share a line only if either could be fitted in the other's place.

    Of equal value, tolerance, characteristic, size and class of rating: the smallest rating made that carries the load.
    """
    groups: dict[tuple[object, ...], list[tuple[Place, FoundPart]]] = {}
    names = _names([result.head for result in results])
    for design, result in zip(names, results, strict=True):
        for part in result.parts:
            place = Place(design, part.ref, part.role)
            groups.setdefault(_same(part, place), []).append((place, part))
    lines = sorted((_line(group) for group in groups.values()), key=_line_order)
    return Bom(dict(zip(names, (result.head for result in results), strict=True)), tuple(lines), boards)


def in_order(ref: str) -> tuple[str, int, str]:
    """Designators by letter, then by number.

    >>> sorted(["R10", "C1", "R2"], key=in_order)
    ['C1', 'R2', 'R10']
    """
    found = re.fullmatch(r"([A-Za-z]*)([0-9]*)(.*)", ref, re.DOTALL)
    letters, digits, rest = found.groups() if found else (ref, "", "")
    return letters, int(digits or 0), rest


def _names(heads: Sequence[DesignHead]) -> list[str]:
    """A name for each design: its stem, numbered where two are alike."""
    stems = [head.stem for head in heads]
    return [
        f"{stem}#{stems[: place + 1].count(stem)}" if stems.count(stem) > 1 else stem
        for place, stem in enumerate(stems)
    ]


def _same(part: FoundPart, place: Place) -> tuple[object, ...]:
    """What two parts must have in common to be one line; a part without value and name is like no other."""
    if part.value is None:
        return (part.kind, part.part or place, part.fitted)
    if not part.fitted:
        return (part.kind, "", part.characteristic, part.size, part.fitted)
    rating = tuple(
        sorted((name, _rating_class(part.kind, name, value)) for name, value in part.required_rating.items())
    )
    return (
        part.kind,
        part.value,
        part.tolerance,
        part.absolute_tolerance,
        part.characteristic,
        part.size,
        rating,
        part.fitted,
    )


def _rating_class(kind: str, name: str, value: float) -> float | None:
    """The smallest rating made that carries a required one; of resistors the size stands for their voltage."""
    if kind != "resistor":
        return value
    if name == "power":
        return next((rating for rating in POWER_RATINGS if value <= rating * SLACK), None)
    return 0.0


def _line(group: Sequence[tuple[Place, FoundPart]]) -> BomLine:
    part = group[0][1]
    return BomLine(
        kind=part.kind,
        value=value_text(part),
        code=_code(part),
        tolerance=tolerance_text(part) if part.fitted else "",
        characteristic=part.characteristic,
        size=part.size,
        required_rating=_largest(other.required_rating for _, other in group),
        stress=_largest(other.stress for _, other in group),
        part_number=part.part,
        fitted=part.fitted,
        places=tuple(place for place, _ in group),
    )


def _code(part: FoundPart) -> str:
    if part.value is None or not part.fitted:
        return ""
    try:
        return write_rkm(float(f"{part.value:.6g}"), part.unit)
    except UnitError:
        return ""


def _largest(loads: Iterable[Mapping[str, float]]) -> dict[str, float]:
    every = list(loads)
    return {
        name: max(load[name] for load in every if name in load)
        for name in LOAD_UNITS
        if any(name in load for load in every)
    }


def _line_order(line: BomLine) -> tuple[object, ...]:
    """Empty places last; else by the first designator."""
    return not line.fitted, min(in_order(place.ref) for place in line.places)
