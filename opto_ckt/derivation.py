"""How each value came about: formula, inputs put in, exact result and source."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from typing import Any

from opto_ckt.formulas.formula import source_of


@dataclass(frozen=True)
class Step:
    """One formula with its numbers put in."""

    name: str  #: what was computed: a designator, or a figure in words
    formula: Callable[..., Any]
    inputs: Mapping[str, float]
    result: float
    reason: str  #: in words, with the figures that decide

    @property
    def source(self) -> str:
        """Where the formula comes from."""
        return source_of(self.formula)

    @property
    def equation(self) -> str:
        """The formula's name as a reader would say it."""
        return self.formula.__name__.replace("_", " ")


@dataclass
class Derivation:
    """The steps taken for one circuit, in order; `compute` is the only way a formula enters a result."""

    steps: list[Step] = field(default_factory=list)
    reasons: dict[str, str] = field(default_factory=dict)  #: designator -> why this value, where no formula gave it

    def compute(self, name: str, formula: Callable[..., Any], *, reason: str = "", **inputs: float) -> float:
        """Evaluate ``formula`` and keep how it was done under ``name``."""
        result = float(formula(**inputs))
        self.steps.append(Step(name, formula, {key: float(value) for key, value in inputs.items()}, result, reason))
        return result

    def note(self, name: str, reason: str) -> None:
        """Say why ``name`` has its value where it is asked for, not computed."""
        self.reasons[name] = reason

    def of(self, name: str) -> Step | None:
        """The last step that gave ``name``."""
        return next((step for step in reversed(self.steps) if step.name == name), None)
