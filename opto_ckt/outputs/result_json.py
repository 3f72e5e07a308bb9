"""A result as JSON: stable order of keys, SI base units, no number that JSON does not have."""

from __future__ import annotations

import json
from collections.abc import Mapping
from math import isfinite
from typing import Any

from opto_ckt import __version__
from opto_ckt.result import FoundFigure, FoundNoise, FoundPart, FoundRequirement, Result

SCHEMA = 1  #: raised when a key changes its meaning or goes


def result_json(result: Result) -> str:
    """The whole result, a line end behind it; figures that are undefined or unbounded are null."""
    return json.dumps(record(result), ensure_ascii=False, allow_nan=False, indent=1) + "\n"


def record(result: Result) -> dict[str, Any]:
    """The result as plain dicts, lists, texts and numbers."""
    head = result.head
    return {
        "schema": SCHEMA,
        "written_by": f"opto-ckt {__version__}",
        "design": {"title": head.title, "revision": head.revision, "circuit": head.circuit, "digest": head.digest},
        "verdict": result.verdict,
        "requirements": [_requirement(row) for row in result.requirements],
        "figures": {figure.name: _figure(figure) for figure in result.figures},
        "parts": [_part(part) for part in result.parts],
        "noise": [_noise(row) for row in result.noise],
        "heat": [
            {
                "ref": row.ref,
                "power": number(row.power),
                "temperature": number(row.temperature),
                "limit": number(row.limit),
                "ok": bool(row.ok),
            }
            for row in result.heat
        ],
        "faults": [{"case": row.case, "result": row.result, "ok": bool(row.ok)} for row in result.faults],
        "roundings": [
            {"figure": row.figure, "exact": number(row.exact), "preferred": number(row.preferred), "unit": row.unit}
            for row in result.roundings
        ],
        "assumed": list(result.assumed),
        "cautions": list(result.cautions),
        "not_checked": list(result.not_checked),
        "alternatives": [
            {
                "circuit": other.circuit,
                "verdict": other.verdict,
                "figures": _numbers(other.figures),
                "parts": other.parts,
            }
            for other in result.alternatives
        ],
    }


def number(value: float | None) -> float | None:
    """A finite float, or None for what JSON has no number for."""
    return float(value) if value is not None and isfinite(value) else None


def _numbers(values: Mapping[str, float]) -> dict[str, float | None]:
    return {name: number(value) for name, value in values.items()}


def _requirement(row: FoundRequirement) -> dict[str, Any]:
    return {
        "figure": row.requirement.figure,
        "limit": row.requirement.side,
        "required": number(row.requirement.bound),
        "nominal": number(row.nominal),
        "worst": number(row.worst),
        "at": dict(row.at),
        "unit": row.unit,
        "met": row.met,
        "remedies": list(row.remedies),
    }


def _figure(figure: FoundFigure) -> dict[str, Any]:
    return {
        "nominal": number(figure.nominal),
        "low": number(figure.low),
        "high": number(figure.high),
        "unit": figure.unit,
    }


def _part(part: FoundPart) -> dict[str, Any]:
    return {
        "ref": part.ref,
        "kind": part.kind,
        "role": part.role,
        "exact": number(part.exact),
        "value": number(part.value),
        "unit": part.unit,
        "tolerance": number(part.tolerance),
        "absolute_tolerance": number(part.absolute_tolerance),
        "characteristic": part.characteristic,
        "size": part.size,
        "part": part.part,
        "fitted": part.fitted,
        "stress": _numbers(part.stress),
        "required_rating": _numbers(part.required_rating),
        "formula": part.formula,
        "source": part.source,
    }


def _noise(row: FoundNoise) -> dict[str, Any]:
    return {"generator": row.generator, "output_rms": number(row.output_rms), "share": number(row.share)}
