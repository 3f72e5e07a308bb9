"""The page that is printed for a sized design: verdict, requirements, parts, figures, noise, heat, faults, remarks."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

from opto_ckt.figures import FIGURES
from opto_ckt.outputs.alternatives_text import alternatives
from opto_ckt.outputs.columns import GAP, aligned, packed, padded, width, wrapped
from opto_ckt.outputs.derivation_text import steps
from opto_ckt.outputs.figure_text import decibel_text, figure_text
from opto_ckt.outputs.ratings import loads_text, tolerance_text, value_text
from opto_ckt.outputs.wording import describe, labels_of
from opto_ckt.result import FoundPart, FoundRequirement, Result
from opto_ckt.units import percent, write

PAGE = 100  #: columns that tables and lists are laid out for
SIGNS = {"min": "≥", "max": "≤"}
BOLD, DIM, GOOD, BAD = "1", "2", "1;32", "1;31"

Line = tuple[str, str]  #: text and its colour; none where empty


def page(result: Result, *, verbose: bool = False, colour: bool = False, columns: int | None = None) -> str:
    """The whole page.

    Parameters
    ----------
    verbose : with source, load and rating of each part, and every formula with its numbers put in.
    colour : with the control sequences of a terminal; nothing is told by colour alone.
    columns : width of the terminal, at which sentences are wrapped; not at all where None.
    """
    sections = (
        _head(result),
        _requirements(result, columns),
        _parts(result, columns, verbose=verbose),
        _figures(result),
        _roundings(result),
        _input_capacitance(result),
        _noise(result),
        _heat(result),
        _faults(result, columns),
        _cautions(result, columns),
        _list("Assumed, where a sheet gives a typical figure only", result.assumed),
        _list("Not checked", result.not_checked),
        _alternatives(result, columns),
        _conventions(result, columns),
        _derivation(result, columns) if verbose else iter(()),
    )
    blocks = ["\n".join(_painted(text, code if colour else "") for text, code in section) for section in sections]
    return "\n\n".join(block for block in blocks if block) + "\n"


def verdict(result: Result) -> str:
    """The outcome in a few words."""
    missed = sum(not row.met for row in result.requirements)
    if missed:
        return f"{missed} of {len(result.requirements)} requirement{'s' * (len(result.requirements) > 1)} missed"
    return {"met": "every requirement met", "none": "no requirement asked"}[result.verdict]


def _painted(text: str, code: str) -> str:
    return f"\x1b[{code}m{text}\x1b[0m" if code else text


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
    rows: list[Sequence[str]] = [("Requirements", "asked", "nominal", "worst found", "", "at")]
    rows += [_requirement(row) for row in result.requirements]
    head, *lines = aligned(rows, "lrrrll", indent=0)
    yield head, BOLD
    for row, line in zip(result.requirements, lines, strict=True):
        colour = "" if row.met else BAD
        for text in _with_list(line, head, describe(row.at, result.limits, labels)):
            yield text, colour
        if row.remedies:
            for text in wrapped(f"would do: {', or '.join(row.remedies)}", 6, columns):
                yield text, ""


def _requirement(row: FoundRequirement) -> tuple[str, ...]:
    name = row.requirement.figure
    asked = f"{SIGNS[row.requirement.side]} {figure_text(name, row.requirement.bound)}"
    met = "met" if row.met else "missed"
    return (f"  {name}", asked, figure_text(name, row.nominal), figure_text(name, row.worst), met, "")


def _with_list(line: str, head: str, items: str) -> Iterator[str]:
    """A row with a list in its last column, of which a line that runs full goes on below."""
    at = width(head) - len("at")
    yield from packed(items.split(", "), at, PAGE, before=padded(line, at))


def _parts(result: Result, columns: int | None, *, verbose: bool) -> Iterator[Line]:
    rows = [("Parts", "", "fitted", "exact", "tolerance", "kind")]
    rows += [
        (f"  {part.ref}", part.role, _fitted(part), _exact(part), tolerance_text(part), _kind(part))
        for part in result.parts
    ]
    head, *lines = aligned(rows, "llrrll", indent=0)
    yield head, BOLD
    for part, line in zip(result.parts, lines, strict=True):
        yield line, ""
        for reason in _reasons(part, verbose=verbose):
            for text in wrapped(reason, 6, columns):
                yield text, DIM


def _fitted(part: FoundPart) -> str:
    return value_text(part) if part.unit or not part.fitted else ""


def _exact(part: FoundPart) -> str:
    if part.exact is None:
        return ""
    return write(part.exact, part.unit, 4, trim=True) if part.exact else "none"


def _kind(part: FoundPart) -> str:
    """What a chosen part is made of, or which part is bought."""
    if part.unit:
        return GAP.join(filter(None, (part.characteristic, part.size)))
    return f"{value_text(part)}, {part.kind}"


def _reasons(part: FoundPart, *, verbose: bool) -> Iterator[str]:
    if part.formula and part.unit:
        yield part.formula
    if verbose and part.source:
        yield f"source: {part.source}"
    if verbose and loads_text(part.stress):
        needs = loads_text(part.required_rating)
        yield f"sees {loads_text(part.stress)} at worst; " + (
            f"needs {needs}" if needs else "no rating made is high enough"
        )


def _figures(result: Result) -> Iterator[Line]:
    rows: list[Sequence[str]] = [("Figures", "nominal", "low", "high", "")]
    for figure in result.figures:
        values = (figure.nominal, figure.low, figure.high)
        texts = (figure_text(figure.name, value) for value in values)
        rows.append((f"  {figure.name}", *texts, _decibels(figure.name, values)))
    head, *lines = aligned(rows, "lrrrl", indent=0)
    yield head, BOLD
    yield from ((line, "") for line in lines)


def _decibels(name: str, values: Sequence[float]) -> str:
    """Nominal, low and high in decibels, where the figure is stated that way too."""
    nominal, low, high = (decibel_text(name, value) for value in values)
    return f"{nominal}, {low} to {high}" if nominal and low and high else nominal


def _roundings(result: Result) -> Iterator[Line]:
    moved = [
        f"{row.figure} {before} to {after}"
        for row in result.roundings
        if (before := figure_text(row.figure, row.exact)) != (after := figure_text(row.figure, row.preferred))
    ]
    nothing = ["no figure by as much as is printed"] if result.roundings else []
    return _list("Rounding to preferred values moved, at nominal", moved or nothing)


def _input_capacitance(result: Result) -> Iterator[Line]:
    total = write(sum(result.input_capacitance.values()), "F")
    items = [f"{name} {write(value, 'F')}" for name, value in result.input_capacitance.items()]
    return _list(f"Input capacitance, {total} nominal", items)


def _noise(result: Result) -> Iterator[Line]:
    total = next((figure.nominal for figure in result.figures if figure.name == "output_noise"), None)
    summed = "shares of the output power" if total is None else f"{write(total, 'V')} rms out"
    low, high = (write(frequency, "Hz", trim=True) for frequency in result.noise_band)
    shares = [f"{row.generator} {percent(row.share, 2)}" for row in result.noise]
    return _list(f"Noise, {summed}, {low} to {high}, nominal", shares)


def _heat(result: Result) -> Iterator[Line]:
    if not result.heat:
        return
    rows = [("Heat, worst", "power", "reaches", "limit", "", "at")]
    for row in result.heat:
        reached, limit = write(row.temperature, "°C"), write(row.limit, "°C")
        rows.append((f"  {row.ref}", write(row.power, "W"), reached, limit, "ok" if row.ok else "too hot", ""))
    head, *lines = aligned(rows, "lrrrll", indent=0)
    yield head, BOLD
    for row, line in zip(result.heat, lines, strict=True):
        for text in _with_list(line, head, describe(row.at, result.limits)):
            yield text, "" if row.ok else BAD


def _faults(result: Result, columns: int | None) -> Iterator[Line]:
    if not result.faults:
        return
    yield "Faults, worst corner of each", BOLD
    longest = max(width(fault.case) for fault in result.faults)
    for fault in result.faults:
        before = f"  {padded(fault.case, longest)}  {'ok        ' if fault.ok else 'over limit'}  "
        first, *others = wrapped(fault.result, width(before), columns)
        colour = "" if fault.ok else BAD
        yield before + first[width(before) :], colour
        for text in others:
            yield text, colour


def _cautions(result: Result, columns: int | None) -> Iterator[Line]:
    if result.cautions:
        yield "Cautions", BOLD
        for caution in result.cautions:
            first, *others = wrapped(caution, 4, columns)
            yield f"  - {first[4:]}", ""
            for text in others:
                yield text, ""


def _list(heading: str, entries: Sequence[str]) -> Iterator[Line]:
    if entries:
        yield heading, BOLD
        for text in packed(entries, 2, PAGE):
            yield text, ""


def _alternatives(result: Result, columns: int | None) -> Iterator[Line]:
    if result.alternatives:
        yield "Other circuits, same request and parts", BOLD
    for sentence in alternatives(result):
        for text in wrapped(sentence, 2, columns):
            yield text, ""


def _conventions(result: Result, columns: int | None) -> Iterator[Line]:
    if not result.figures:
        return
    yield "What the figures mean", BOLD
    longest = max(width(figure.name) for figure in result.figures)
    for figure in result.figures:
        first, *others = wrapped(FIGURES[figure.name].convention, longest + 4, columns)
        yield f"  {padded(figure.name, longest)}  {first[longest + 4 :]}", DIM
        for text in others:
            yield text, DIM


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
