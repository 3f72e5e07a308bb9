"""Entries of a design file that are neither a figure nor a table of known keys: limits, spreads, the drawer."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from difflib import get_close_matches
from typing import Any, NamedTuple

from opto_ckt.figures import FIGURES
from opto_ckt.parts.record import Assumed, Finding, FindingsError, ReadBy, Unit, plain_text, refusal, shown
from opto_ckt.preferred import SERIES, Series


class Limit(NamedTuple):
    """What is asked of one figure, in SI; at least one of the two."""

    min: float | None = None
    max: float | None = None


def meant(word: str, words: Any) -> str:
    """The hint at the word that is nearest to a mistaken one; empty where none is near."""
    near = get_close_matches(word, list(words), n=1, cutoff=0.6)
    return f"; did you mean '{near[0]}'?" if near else ""


def collect(value: Any, what: str, read_entry: Callable[[str, Any], Any]) -> dict[str, Any]:
    """Each entry of a table by its own reader, every finding kept under its key."""
    if not isinstance(value, Mapping):
        raise refusal(f"expected a table of {what}, got {shown(value)}")
    entries: dict[str, Any] = {}
    findings: list[Finding] = []
    for key, entry in value.items():
        try:
            entries[key] = read_entry(str(key), entry)
        except FindingsError as error:
            findings += [Finding((str(key), *finding.path), finding.message) for finding in error.findings]
    if findings:
        raise FindingsError(findings)
    return entries


def read_limits(value: Any, *, from_file: bool) -> dict[str, Limit]:
    """The table `[require]`: figure name to limits in the unit of the figure."""

    def read_entry(name: str, entry: Any) -> Limit:
        figure = FIGURES.get(name)
        if figure is None:
            raise refusal(f"is no figure; allowed are {', '.join(FIGURES)}{meant(name, FIGURES)}")
        if isinstance(entry, Limit):
            return entry
        example = "{ min = ... }, { max = ... } or both"
        if not isinstance(entry, Mapping):
            raise refusal(f"expected {example}, got {shown(entry)}")
        if not entry:
            raise refusal(f"is an empty table; expected {example}")
        wrong = [
            Finding((str(key),), f"is not known here; allowed is {example}")
            for key in entry
            if key not in ("min", "max")
        ]
        if wrong:
            raise FindingsError(wrong)
        spread = Unit(figure.unit, sign="any").read_spread(entry, from_file=from_file)
        return Limit(spread.min, spread.max)

    return collect(value, "figures and their limits", read_entry)


def read_assumed(value: Any, *, from_file: bool) -> dict[str, Assumed]:
    """The table `[assumed]`: figure name to relative spread, '30 %' either way or { low, high }."""
    share = Unit("1", "30 %", "not negative")

    def read_entry(name: str, entry: Any) -> Assumed:
        if isinstance(entry, Assumed):
            return entry
        if not isinstance(entry, Mapping):
            both = share.read_number(entry, from_file=from_file)
            return _below_whole(Assumed(low=both, high=both))
        wrong = [
            Finding((str(key),), "is not known here; low and high are") for key in entry if key not in ("low", "high")
        ]
        if wrong:
            raise FindingsError(wrong)
        sides = collect(entry, "low and high", lambda side, part: share.read_number(part, from_file=from_file))
        return _below_whole(Assumed(**sides))

    return collect(value, "figures and their relative spread", read_entry)


def _below_whole(assumed: Assumed) -> Assumed:
    if assumed.low >= 1:
        raise FindingsError(
            [Finding((), "a spread of 100 % or more leaves nothing of the figure; write { low = ..., high = ... }")]
        )
    return assumed


LETTERS: Mapping[str, Unit] = {"R": Unit("Ω", "22 kΩ"), "C": Unit("F", "1 pF"), "L": Unit("H", "10 µH")}


def read_fixed(value: Any, *, from_file: bool) -> dict[str, float]:
    """The table `[fixed]`: reference designator to value; the letter says the unit."""

    def read_entry(designator: str, entry: Any) -> float:
        unit = LETTERS.get(designator[:1])
        if unit is None or not (designator[1:].isascii() and designator[1:].isalnum()):
            raise FindingsError(
                [Finding((), 'is no designator of a value; R, C or L and a number are, such as R1 = "22 kΩ"')]
            )
        return unit.read_number(entry, from_file=from_file)

    return collect(value, "designators and values", read_entry)


def series_in(unit: Unit) -> ReadBy:
    """Reader of a series: its name, or the list of values that lie in the drawer."""

    def read_series(value: Any, *, from_file: bool) -> Series:
        if isinstance(value, list | tuple):
            drawer = [_in_drawer(unit, position, entry, from_file=from_file) for position, entry in enumerate(value)]
            if not drawer:
                raise refusal("the list is empty; at least one value is needed")
            return tuple(sorted(set(drawer)))
        if not isinstance(value, str) or value not in SERIES:
            hint = meant(value, SERIES) if isinstance(value, str) else ""
            raise FindingsError(
                [
                    Finding(
                        (), f"{shown(value)} is no series; allowed are {', '.join(SERIES)}, or a list of values{hint}"
                    )
                ]
            )
        return value

    return ReadBy(read_series)


def _in_drawer(unit: Unit, position: int, entry: Any, *, from_file: bool) -> float:
    try:
        return unit.read_number(entry, from_file=from_file)
    except FindingsError as error:
        raise FindingsError(
            [Finding((position, *finding.path), finding.message) for finding in error.findings]
        ) from None


def one_of(what: str, words: Mapping[str, Any]) -> ReadBy:
    """Reader of a word out of a table of known ones."""

    def read_word(value: Any, *, from_file: bool) -> str:
        word = plain_text(value)
        if word not in words:
            raise FindingsError(
                [Finding((), f"'{word}' is no known {what}; allowed are {', '.join(words)}{meant(word, words)}")]
            )
        return word

    return ReadBy(read_word)
