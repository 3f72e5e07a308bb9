"""Receivers at exact values, in the light: their starters with lines changed."""

from __future__ import annotations

from functools import cache

import numpy as np

from opto_ckt.analyses.network import Evaluation
from opto_ckt.derivation import Derivation
from opto_ckt.design.model import Model
from tests.circuits.sized import model

Changes = tuple[tuple[str, str], ...]

RECEIVERS = ("tia", "load-resistor", "tia-fixed")
BARE: Changes = (("bias_filter", ""), ("post_filter", ""), ("coupling", 'coupling = "dc"'))
"""Of the bought amplifier's starter: nothing around it."""


@cache
def lit(name: str, changes: Changes) -> tuple[Model, dict[str, float]]:
    """A model and its values of all limits at nominal, with the exact values of its fitted parts."""
    found = model(name, *changes)
    exact = {part.ref: part.exact for part in found.proposal(Derivation())}
    return found, found.nominal() | exact


def evaluated(name: str, changes: Changes, **others: float) -> tuple[dict[str, float], Evaluation]:
    found, values = lit(name, changes)
    biased = found.biased(values | {key.replace("__", "."): value for key, value in others.items()})
    return {key: float(np.asarray(value).reshape(-1)[0]) for key, value in biased.items()}, found.evaluation(biased)
