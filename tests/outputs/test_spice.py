"""Decks: the portable subset, card by card, for every design and every circuit's starter."""

from __future__ import annotations

import re
from collections import defaultdict
from functools import cache
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st

from opto_ckt.circuits import CIRCUITS, load
from opto_ckt.design.reading import read_request
from opto_ckt.design.sizing import size
from opto_ckt.outputs.spice import deck_of, decks, kinds
from opto_ckt.outputs.spice_text import LONGEST, card, comment, name, number, plain, title
from opto_ckt.result import Result
from tests.circuits.sized import sized

DESIGNS = Path(__file__).parents[2] / "designs"
SOURCES = [*CIRCUITS, *sorted(path.name for path in DESIGNS.glob("*.toml") if path.name != "parts.toml")]
KINDS = ("ac", "noise", "step", "loop")
NODES = {"r": 2, "c": 2, "l": 2, "v": 2, "i": 2, "d": 2, "e": 4, "g": 4, "f": 2, "h": 2, "q": 3, "j": 3, "m": 4}
CONDUCTS = {"r", "l", "v", "d", "e", "h"}  #: give a path for direct current between their first two nodes
DOTS = {".subckt", ".ends", ".model", ".options", ".op", ".ac", ".noise", ".tran", ".end"}
NUMBER = re.compile(r"[-+]?\d+(\.\d+)?(e[-+]?\d+)?")


@cache
def result_of(source: str) -> Result:
    if source in CIRCUITS:
        return sized(source)
    read = read_request(str(DESIGNS / source), circuit_of=lambda circuit: load(circuit).request, circuits=CIRCUITS)
    return size(read, load(read.request.circuit))


def cards_of(deck: str) -> list[list[str]]:
    """Cards as lists of words: without title and comments, continuations joined."""
    lines: list[str] = []
    for line in deck.splitlines()[1:]:
        if line.startswith("+"):
            lines[-1] += " " + line[1:]
        elif not line.startswith("*"):
            lines.append(line)
    return [line.split() for line in lines]


def scopes(deck: str) -> dict[str, list[list[str]]]:
    """Element cards by subcircuit; those outside under an empty name."""
    found: dict[str, list[list[str]]] = defaultdict(list)
    inside = ""
    for words in cards_of(deck):
        if words[0] == ".subckt":
            inside = words[1]
            found[inside] = [words]
        elif words[0] == ".ends":
            inside = ""
        elif not words[0].startswith("."):
            found[inside].append(words)
    return found


def nodes_of(words: list[str]) -> list[str]:
    return words[1:-1] if words[0][0] == "x" else words[1 : 1 + NODES[words[0][0]]]


def with_deck(source: str, kind: str) -> Result:
    result = result_of(source)
    if kind not in kinds(result.topology):
        pytest.skip("a circuit without a loop of its own has no loop deck")
    return result


@pytest.mark.parametrize("kind", KINDS)
@pytest.mark.parametrize("source", SOURCES)
def test_a_deck_keeps_to_the_portable_subset(source: str, kind: str) -> None:
    result = with_deck(source, kind)
    for scene in result.scenes:
        deck = deck_of(result, scene, kind)
        lines = deck.splitlines()
        assert deck.isascii()
        assert "\r" not in deck
        assert deck.endswith("\n.end\n")
        assert lines[0].strip()
        assert lines[0][0].isalnum()
        assert max(map(len, lines)) <= LONGEST
        assert "opto-ckt" in lines[1]
        words = cards_of(deck)
        assert {first[0] for first in words if first[0].startswith(".")} <= DOTS
        analyses = [first[0] for first in words if first[0] in (".ac", ".noise", ".tran")]
        assert len(analyses) == 1
        assert all(text == text.lower() for first in words for text in first)
        for first in words:
            assert not first[0][0].isspace()
            if first[0] == ".tran":
                assert len(first) == 5
        for cards in scopes(deck).values():
            names = [first[0] for first in cards]
            assert len(names) == len(set(names)), sorted(names)
            for first in cards:
                assert re.fullmatch(r"[a-z.][a-z0-9_]{0,7}", first[0]), first
                for node in nodes_of(first) if first[0] != ".subckt" else first[2:]:
                    assert node == "0" or re.fullmatch(r"[a-z][a-z0-9_]{0,7}", node), first


@pytest.mark.parametrize("kind", KINDS)
@pytest.mark.parametrize("source", SOURCES)
def test_every_value_is_a_plain_number(source: str, kind: str) -> None:
    result = with_deck(source, kind)
    for words in cards_of(deck_of(result, result.scenes[0], kind)):
        if words[0][0] in "rclegh":
            assert NUMBER.fullmatch(words[-1]), words
        if words[0] == ".model":
            values = re.findall(r"=([^ )]+)", " ".join(words))
            assert all(NUMBER.fullmatch(value) for value in values), words


@pytest.mark.parametrize("kind", KINDS)
@pytest.mark.parametrize("source", SOURCES)
def test_every_node_has_two_connections_and_a_path_for_direct_current(source: str, kind: str) -> None:
    """A capacitor carries none; a controlled current source on its own nodes conducts like a resistor."""
    result = with_deck(source, kind)
    for inside, cards in scopes(deck_of(result, result.scenes[0], kind)).items():
        met: dict[str, int] = defaultdict(int)
        joined: dict[str, set[str]] = defaultdict(set)
        pins = cards[0][2:] if inside else []
        for words in cards[1:] if inside else cards:
            nodes = nodes_of(words)
            for node in nodes:
                met[node] += 1
            own = words[0][0] == "g" and nodes[:2] == nodes[2:]
            if words[0][0] in CONDUCTS or own:
                _join(joined, nodes[:2])
            elif words[0][0] in "qj":
                _join(joined, nodes[:3])
            elif words[0][0] == "m":
                _join(joined, [nodes[0], nodes[2]])
            elif words[0][0] == "x":
                _join(joined, nodes)
        for pin in pins:
            met[pin] += 1
            _join(joined, [pin, "0"])
        reached, todo = {"0"}, ["0"]
        while todo:
            for node in joined[todo.pop()] - reached:
                reached.add(node)
                todo.append(node)
        assert not {node for node in met if met[node] < 2 and node != "0"}, inside
        assert not set(met) - reached, inside


def _join(joined: dict[str, set[str]], nodes: list[str]) -> None:
    for node in nodes:
        joined[node] |= set(nodes)


@pytest.mark.parametrize("source", SOURCES)
def test_subcircuits_name_their_pins_for_the_makers_model(source: str) -> None:
    deck = decks(result_of(source))[f"{result_of(source).head.stem}.ac.cir"]
    lines = deck.splitlines()
    starts = [index for index, line in enumerate(lines) if line.startswith(".subckt")]
    assert starts
    for index in starts:
        before = " ".join(line for line in lines[max(0, index - 4) : index] if line.startswith("*"))
        assert "pins:" in before
        assert "maker's model" in before


def test_expectations_carry_both_units_of_noise() -> None:
    deck = decks(result_of("tia"))["design.noise.cir"]
    assert re.search(r"expect onoise at 1.00 MHz: \S+ V/rtHz = \S+ V\^2/Hz", deck.replace("\n* ", " "))
    assert re.search(r"expect inoise at 1.00 MHz: \S+ W/rtHz", deck.replace("\n* ", " "))


@given(st.text(max_size=300))
def test_no_title_becomes_a_card(text: str) -> None:
    line = title(text, "tia")
    assert line.count("\n") == 1
    assert line.endswith("\n")
    assert line.isascii()
    assert line[0].isalnum()
    assert len(line) <= LONGEST + 1


@given(st.text(max_size=300))
def test_no_comment_becomes_a_card(text: str) -> None:
    lines = comment(text).splitlines()
    assert all(line.startswith("*") and len(line) <= LONGEST for line in lines)
    assert all(line.isascii() for line in lines)


@given(st.floats(min_value=-1e30, max_value=1e30, allow_nan=False))
def test_a_number_is_read_back(value: float) -> None:
    assert NUMBER.fullmatch(number(value))
    assert float(number(value)) == pytest.approx(value, rel=1e-11, abs=0)


def test_long_cards_go_on_behind_a_plus() -> None:
    text = card(".model", *(f"x{index}=1" for index in range(40)))
    assert all(len(line) <= LONGEST for line in text.splitlines())
    assert all(line.startswith("+") for line in text.splitlines()[1:])


@pytest.mark.parametrize("text", ["", "9lives", "a-b", "toolongname", "ü"])
def test_names_that_are_not_portable_are_refused(text: str) -> None:
    with pytest.raises(ValueError, match="portable"):
        name(text)


def test_a_newline_in_a_title_cannot_end_the_line() -> None:
    assert plain("one\nr1 1 0 1") == "one r1 1 0 1"
