from __future__ import annotations

import json
from math import inf, nan
from typing import Any

import numpy as np
from hypothesis import given
from hypothesis import strategies as st

from opto_ckt.outputs.result_json import record, result_json
from opto_ckt.result import FoundFigure
from tests.outputs.results import MET, result

TEXT, NUMBER, TRUTH = (str,), (float, int, type(None)), (bool,)
SHAPE: dict[str, Any] = {
    "schema": (int,),
    "written_by": TEXT,
    "design": {"title": TEXT, "revision": TEXT, "circuit": TEXT, "digest": TEXT},
    "verdict": TEXT,
    "requirements": [
        {
            "figure": TEXT, "limit": TEXT, "required": NUMBER, "nominal": NUMBER, "worst": NUMBER, "at": (dict,),
            "unit": TEXT, "met": TRUTH, "remedies": [TEXT],
        }
    ],
    "figures": (dict,),
    "parts": [
        {
            "ref": TEXT, "kind": TEXT, "role": TEXT, "exact": NUMBER, "value": NUMBER, "unit": TEXT,
            "tolerance": NUMBER, "absolute_tolerance": NUMBER, "characteristic": TEXT, "size": TEXT, "part": TEXT,
            "fitted": TRUTH, "stress": (dict,), "required_rating": (dict,), "formula": TEXT, "source": TEXT,
        }
    ],
    "noise": [{"generator": TEXT, "output_rms": NUMBER, "share": NUMBER}],
    "heat": [{"ref": TEXT, "power": NUMBER, "temperature": NUMBER, "limit": NUMBER, "ok": TRUTH}],
    "faults": [{"case": TEXT, "result": TEXT, "ok": TRUTH}],
    "roundings": [{"figure": TEXT, "exact": NUMBER, "preferred": NUMBER, "unit": TEXT}],
    "assumed": [TEXT],
    "cautions": [TEXT],
    "not_checked": [TEXT],
    "alternatives": [{"circuit": TEXT, "verdict": TEXT, "figures": (dict,), "parts": (int, type(None))}],
}  # fmt: skip


def has_shape(value: Any, shape: Any) -> bool:
    if isinstance(shape, dict):
        return list(value) == list(shape) and all(has_shape(value[key], shape[key]) for key in shape)
    if isinstance(shape, list):
        return all(has_shape(entry, shape[0]) for entry in value)
    return type(value) in shape


def test_keys_kinds_and_their_order_are_fixed() -> None:
    assert has_shape(json.loads(result_json(result())), SHAPE)


def test_numbers_are_those_of_the_result_in_si() -> None:
    read = json.loads(result_json(result()))
    assert read["requirements"][0]["required"] == 8e6
    assert read["requirements"][0]["at"] == {"U1.gain_bandwidth": "low", "temperature": "high"}
    assert read["figures"]["bandwidth"] == {"nominal": 9.31e6, "low": 8.49e6, "high": 10.2e6, "unit": "Hz"}
    assert read["parts"][1]["value"] == 0.36e-12
    assert read["heat"][0]["temperature"] == 351.15
    assert read["verdict"] == "missed"


def test_verdicts() -> None:
    assert record(result(requirements=(MET,)))["verdict"] == "met"
    assert record(result(requirements=()))["verdict"] == "none"


def test_what_json_has_no_number_for_is_null() -> None:
    text = result_json(result(figures=(FoundFigure("bandwidth", nan, -inf, inf, {}, {}, "Hz"),)))
    assert json.loads(text)["figures"]["bandwidth"] == {"nominal": None, "low": None, "high": None, "unit": "Hz"}
    assert "NaN" not in text
    assert "Infinity" not in text


@given(value=st.floats(allow_nan=False, allow_infinity=False))
def test_every_float_comes_back_as_it_was(value: float) -> None:
    figures = (FoundFigure("bandwidth", np.float64(value), value, value, {}, {}, "Hz"),)
    assert json.loads(result_json(result(figures=figures)))["figures"]["bandwidth"]["nominal"] == value


def test_it_ends_with_a_line_and_carries_the_marker_early() -> None:
    text = result_json(result())
    assert text.endswith("}\n")
    assert "opto-ckt" in text[:200]
    assert text == result_json(result())
