"""The page that is printed for a sized design: verdict, requirements, parts, figures, noise, heat, faults, remarks."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Sequence

from opto_ckt.figures import FIGURES
from opto_ckt.outputs.columns import GAP, aligned, hanging, padded, width, wrapped
from opto_ckt.outputs.derivation_text import steps
from opto_ckt.outputs.figure_text import decibel_text, figure_text
from opto_ckt.outputs.ratings import loads_text, tolerance_text, value_text
from opto_ckt.outputs.wording import describe, labels_of
from opto_ckt.result import FoundPart, FoundRequirement, Result
from opto_ckt.units import percent, write

PAGE = 100  #: columns over which the verdict is set to the right
SIGNS = {"min": "≥", "max": "≤"}
BOLD, DIM, GOOD, BAD = "1", "2", "32;1", "31;1"

Paint = Callable[[str, str], str]
Line = tuple[str, str]  #: text and its colour


def page(result: Result, *, verbose: bool = False, colour: bool = False, columns: int | None = None) -> str:
    """The whole page.

    Parameters
    ----------
    verbose : with loads and ratings of the parts, noise of each generator, and every formula with its numbers put in.
    colour : with the control sequences of a terminal; nothing is told by colour alone.
    columns : width at which sentences are wrapped; not at all where None.
    """
    sections = [
        _head(result),
        _requirements(result, columns),
        _parts(result, verbose, columns),
        _figures(result, columns),
        _rounding(result, columns),
        _input_capacitance(result, columns),
        _noise(result, verbose, columns),
        _heat(result, columns),
        _faults(result, columns),
        _listed("Cautions", result.cautions, columns),
        _listed("Assumed spreads, where the sheet gives typ only", result.assumed, columns, joined=True),
        _listed("Not checked", result.not_checked, columns, joined=True),
        _derivation(result, columns) if verbose else (),
    ]
    blocks = ["\n".join(_painted(text, code, colour) for text, code in section) for section in map(list, sections) if section]
    return "\n\n".join(blocks) + "\n"


def verdict(result: Result) -> str:
    """The outcome in a few words."""
    missed = sum(not row.met for row in result.requirements)
    if result.verdict == "missed":
        return f"{missed} of {len(result.requirements)} requirement{'s' * (len(result.requirements) > 1)} missed"
    return {"met": "every requirement met", "none": "no requirement asked"}[result.verdict]


def _painted(text: str, code: str, colour: bool) -> str:
    return f"\x1b[{code}m{text}\x1b[0m" if colour and code else text


def _head(result: Result) -> Iterator[Line]:
    head = result.head
    title = ", ".join(filter(None, (head.title or head.stem, head.revision and f"rev {head.revision}", head.circuit)))
    found = verdict(result)
    blanks = " " * max(len(GAP), PAGE - width(title) - width(found))
    yield title + blanks + found, {"met": GOOD, "missed": BAD, "none": BOLD}[result.verdict]


def _requirements(result: Result, columns: int | None) -> Iterator[Line]:
    if not result.requirements:
        return
    labels = labels_of(result.topology)
    rows = [("Requirements", "asked", "nominal", "worst found", "", "at")]
    rows += [_requirement(row, describe(row.at, labels=labels)) for row in result.requirements]
    head, *lines = _under_heading(rows, "lrrrll")
    last = width(head) - width("at")
    yield head, BOLD
    for row, line in zip(result.requirements, lines, strict=True):
        for text in hanging(line, last, columns):
            yield text, "" if row.met else BAD
        if row.remedies:
            for text in wrapped(f"would do: {', or '.join(row.remedies)}", 6, columns):
                yield text, ""


def _requirement(row: FoundRequirement, at: str) -> tuple[str, ...]:
    name = row.requirement.figure
    asked = f"{SIGNS[row.requirement.side]} {figure_text(name, row.requirement.bound)}"
    return (f"  {name}", asked, figure_text(name, row.nominal), figure_text(name, row.worst), "met" if row.met else "missed", at)


def _under_heading(rows: Sequence[Sequence[str]], sides: str) -> list[str]:
    """A table whose first row is the heading of the section."""
    return aligned(rows, sides, indent=0)


def _parts(result: Result, verbose: bool, columns: int | None) -> Iterator[Line]:
    rows = [("Parts", "", "fitted", "exact", "", "")]
    rows += [(f"  {part.ref}", part.role, value_text(part), _exact(part), tolerance_text(part), _make(part)) for part in result.parts]
    head, *lines = _under_heading(rows, "llrrll")
    yield head, BOLD
    for part, line in zip(result.parts, lines, strict=True):
        yield line, ""
        for text in _reasons(part, verbose):
            for wrapped_text in wrapped(text, 6, columns):
                yield wrapped_text, DIM


def _exact(part: FoundPart) -> str:
    return "" if part.exact is None else write(part.exact, part.unit, 4) if part.exact else "none"


def _make(part: FoundPart) -> str:
    return GAP.join(filter(None, (part.characteristic, part.size, part.kind if not part.unit else "")))


def _reasons(part: FoundPart, verbose: bool) -> Iterator[str]:
    if part.formula and (part.unit or verbose):
        yield part.formula
    if verbose:
        if part.source:
            yield f"source: {part.source}"
        if part.stress:
            yield f"sees {loads_text(part.stress)}; needs {loads_text(part.required_rating) or 'no rating that is made'}"


def _figures(result: Result, columns: int | None) -> Iterator[Line]:
    rows = [("Figures", "nominal", "low", "high", "", "")]
    for figure in result.figures:
        values = (figure.nominal, figure.low, figure.high)
        beside = decibel_text(figure.name, figure.nominal)
        texts = [figure_text(figure.name, value) for value in values]
        rows.append((f"  {figure.name}", *texts, beside, FIGURES[figure.name].convention))
    head, *lines = _under_heading(rows, "lrrrrl")
    yield head, BOLD
    last = min((width(line) - width(row[-1]) for line, row in zip(lines, rows[1:], strict=True)), default=0)
    for line in lines:
        for text in hanging(line, last, columns):
            yield text, ""


def _rounding(result: Result, columns: int | None) -> Iterator[Line]:
    moved = [
        f"{row.figure} {before} -> {after}"
        for row in result.roundings
        if (before := figure_text(row.figure, row.exact)) != (after := figure_text(row.figure, row.preferred))
    ]
    yield "Rounding, from exact to preferred values at nominal", BOLD
    for text in wrapped(", ".join(moved) or "no figure moves by as much as is printed", 2, columns):
        yield text, ""


def _input_capacitance(result: Result, columns: int | None) -> Iterator[Line]:
    if not result.input_capacitance:
        return
    total = write(sum(result.input_capacitance.values()), "F")
    yield f"Input capacitance, {total} nominal", BOLD
    parts = ", ".join(f"{name} {write(value, 'F')}" for name, value in result.input_capacitance.items())
    for text in wrapped(parts, 2, columns):
        yield text, ""


def _noise(result: Result, verbose: bool, columns: int | None) -> Iterator[Line]:
    if not result.noise:
        return
    total = next((figure.nominal for figure in result.figures if figure.name == "output_noise"), None)
    low, high = (write(frequency, "Hz", trim=True) for frequency in result.noise_band)
    summed = f"{write(total, 'V')} rms out" if total is not None else "share of the output power"
    yield f"Noise, {summed}, {low} to {high}, nominal", BOLD
    if verbose:
        rows = [(row.generator, write(row.output_rms, "V"), percent(row.share, 2)) for row in result.noise]
        yield from ((line, "") for line in aligned(rows, "lrr"))
        return
    for text in wrapped(", ".join(f"{row.generator} {percent(row.share, 2)}" for row in result.noise), 2, columns):
        yield text, ""


def _heat(result: Result, columns: int | None) -> Iterator[Line]:
    if not result.heat:
        return
    rows = [("Heat, worst", "power", "reaches", "limit", "", "at")]
    for row in result.heat:
        reached, limit = write(row.temperature, "°C"), write(row.limit, "°C")
        rows.append((f"  {row.ref}", write(row.power, "W"), reached, limit, "ok" if row.ok else "too hot", describe(row.at)))
    head, *lines = _under_heading(rows, "lrrrll")
    yield head, BOLD
    for row, line in zip(result.heat, lines, strict=True):
        for text in hanging(line, width(head) - width("at"), columns):
            yield text, "" if row.ok else BAD


def _faults(result: Result, columns: int | None) -> Iterator[Line]:
    if not result.faults:
        return
    yield "Faults, worst corner of each", BOLD
    longest = max(width(fault.case) for fault in result.faults)
    for fault in result.faults:
        line = f"  {padded(fault.case, longest)}  {'ok        ' if fault.ok else 'over limit'}  {fault.result}"
        for text in hanging(line, longest + 16, columns):
            yield text, "" if fault.ok else BAD


def _listed(heading: str, entries: Sequence[str], columns: int | None, *, joined: bool = False) -> Iterator[Line]:
    if not entries:
        return
    yield heading, BOLD
    for entry in [", ".join(entries)] if joined else entries:
        for text in wrapped(entry, 2, columns):
            yield text, ""


def _derivation(result: Result, columns: int | None) -> Iterator[Line]:
    if not result.derivation.steps:
        return
    yield "Derivation, each formula with its numbers put in", BOLD
    for step in result.derivation.steps:
        first, *others = steps(step)
        yield f"  {first}", ""
        for other in others:
            for text in wrapped(other, 6, columns):
                yield text, DIM
