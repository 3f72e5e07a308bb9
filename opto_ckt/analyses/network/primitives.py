"""The few two- and four-terminal primitives that every element is built of, with their values as expressions."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Any, Literal

GROUND = "0"

Value = Callable[[Mapping[str, Any]], Any]
"""A branch-free expression of named values: + - * / and small whole powers only, so that it takes floats, arrays of
lanes, nodes of a program and symbols alike."""

Kind = Literal["R", "C", "L", "G", "E", "V"]

TERMINALS: dict[str, int] = {"R": 2, "C": 2, "L": 2, "G": 4, "E": 4, "V": 2}


@dataclass(frozen=True)
class Primitive:
    """One linear primitive, with the node order and signs of SPICE.

    Parameters
    ----------
    kind : R [Ω], C [F], L [H], G (voltage-controlled current [S]), E (voltage-controlled voltage [V/V]),
        V (0 V source: an ammeter, or a supply at signal ground; its value is not read).
    name : unique in its network.
    nodes : two; four for G and E: out+, out-, control+, control-. The current of G flows from out+ through the
        source to out-.
    value : the expression of its value.
    """

    kind: Kind
    name: str
    nodes: tuple[str, ...]
    value: Value

    def __post_init__(self) -> None:
        expected = TERMINALS.get(self.kind)
        if expected is None:
            raise ValueError(f"{self.name}: kind {self.kind!r} is not one of {', '.join(TERMINALS)}")
        if len(self.nodes) != expected:
            raise ValueError(f"{self.name}: {self.kind} has {expected} nodes, got {len(self.nodes)}")


@dataclass(frozen=True)
class NoiseGenerator:
    """A noise current from the first node through the generator to the second.

    Parameters
    ----------
    label : as printed, such as "R1 thermal".
    nodes : the two nodes it lies between.
    density : white part of its power density. [A²/Hz]
    corner : frequency at which its 1/f part equals the white part; None for a white generator. [Hz]
    """

    label: str
    nodes: tuple[str, str]
    density: Value
    corner: Value | None = None


@dataclass(frozen=True)
class Expansion:
    """A network of primitives with its input, output, noise generators and the place where its loop is opened.

    Parameters
    ----------
    primitives : in any order; the node "0" is ground.
    generators : uncorrelated.
    input : nodes between which the input signal drives its current, from the first through the source to the second.
    gain : current of the input source for an input signal of 1. [A per unit of input]
    output : the output voltage is that of the first node above the second.
    loop : name of the G or E primitive whose return ratio is the loop gain; None where there is no loop to speak of.
    rival : nodes and gain of another input, as of the first; None where there is none.
    """

    primitives: tuple[Primitive, ...]
    generators: tuple[NoiseGenerator, ...]
    input: tuple[str, str]
    gain: Value
    output: tuple[str, str]
    loop: str | None = None
    rival: tuple[tuple[str, str], Value] | None = None
