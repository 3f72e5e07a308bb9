from __future__ import annotations

import re

from opto_ckt.analyses.network.expansion import expand
from opto_ckt.formulas.transimpedance import feedback_capacitance, feedback_resistance
from opto_ckt.outputs.derivation_text import described
from opto_ckt.outputs.formula_page import formula_page
from tests.outputs.results import VALUES, topology

FORMULAS = (feedback_resistance, feedback_capacitance)
EXPANSION = expand(topology())


def test_the_transfer_function_is_that_of_the_textbook() -> None:
    """The op amp an integrator: second order, the highest power by all of the capacitance at the summing node."""
    text = formula_page("tia: amplifier", EXPANSION, VALUES, FORMULAS)
    assert "H(s) ≈ b0/(a0 + a1·s + a2·s²), within " in text
    assert "  b0 = D1.responsivity·R1·U1.gain_bandwidth\n  a0 = U1.gain_bandwidth\n" in text
    highest = next(line for line in text.splitlines() if line.startswith("  a2 = "))
    assert re.fullmatch(r"  a2 = R1·\(.*D1\.capacitance \+ U1\.common_capacitance.*\)/\(2·π\)", highest)


def test_how_near_it_comes_is_said_with_what_was_left_out() -> None:
    text = formula_page("tia: amplifier", EXPANSION, VALUES, ())
    (share,) = (float(found) for found in re.findall(r"within ([0-9.]+) % of the largest up to", text))
    assert 0 < share < 25
    assert "Taken as an open" in text
    assert "D1.transit_c" in text


def test_relations_have_symbols_units_and_source() -> None:
    text = formula_page("tia: amplifier", EXPANSION, VALUES, FORMULAS)
    assert "feedback_resistance [Ω] = V/I\n" in text
    assert "    I [A]  current: change of the photocurrent\n" in text
    assert "    source: definition" in text


def test_latex_has_one_display_a_formula() -> None:
    text = formula_page("tia: amplifier", EXPANSION, VALUES, FORMULAS, as_latex=True)
    lines = [line for line in text.splitlines() if not line.startswith("%")]
    assert len(lines) == 4
    assert all(line.startswith(r"\[ ") and line.endswith(r" \]") for line in lines)
    assert all(line.count("{") == line.count("}") for line in lines)
    assert r"\mathrm{feedback\ resistance} = \frac{V}{I}" in text


def test_a_formula_is_described_by_its_own_words() -> None:
    about = described(feedback_capacitance)
    assert about.unit == "F"
    assert about.parameters["input_capacitance"].symbol == "C_i"
    assert about.parameters["gain_bandwidth"].unit == "Hz"
