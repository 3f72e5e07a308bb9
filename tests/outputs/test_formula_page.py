from __future__ import annotations

from opto_ckt.formulas.transimpedance import feedback_capacitance, feedback_resistance
from opto_ckt.outputs.derivation_text import described
from opto_ckt.outputs.formula_page import formula_page
from tests.outputs.results import topology

FORMULAS = (feedback_resistance, feedback_capacitance)


def test_the_transfer_function_is_that_of_the_textbook() -> None:
    """One pole of the op amp, so second order: b0/(a0 + a1 s + a2 s²), the highest power by all of the capacitance."""
    text = formula_page("tia: amplifier", topology(), FORMULAS)
    assert "H(s) = b0/(a0 + a1·s + a2·s²)" in text
    assert "b0 = D1.responsivity·R1·U1.gain_bandwidth·U1.open_loop_gain\n" in text
    assert "a0 = U1.gain_bandwidth·(U1.open_loop_gain + 1)\n" in text
    total = "(C1 + D1.capacitance + U1.common_capacitance + U1.differential_capacitance)"
    assert f"a2 = R1·U1.open_loop_gain·{total}/(2·π)\n" in text


def test_what_is_left_out_is_said() -> None:
    text = formula_page("tia: amplifier", topology(), ())
    assert "CB (board)" in text
    assert "U1.second_pole" in text


def test_relations_have_symbols_units_and_source() -> None:
    text = formula_page("tia: amplifier", topology(), FORMULAS)
    assert "feedback_resistance [Ω] = V/I\n" in text
    assert "    I [A]  current: change of the photocurrent\n" in text
    assert "    source: definition" in text


def test_latex_has_one_display_a_formula() -> None:
    text = formula_page("tia: amplifier", topology(), FORMULAS, as_latex=True)
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
