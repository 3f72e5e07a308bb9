from __future__ import annotations

import re
from dataclasses import replace

from opto_ckt.outputs.columns import width
from opto_ckt.outputs.report import PAGE, page, verdict
from tests.outputs.results import MET, MISSED, R1, result

SECTIONS = (
    "Valley receiver", "Requirements", "Parts", "Figures", "Rounding", "Noise", "Heat", "Faults", "Cautions",
    "Assumed", "Not checked", "What the figures mean",
)  # fmt: skip


def line_of(text: str, beginning: str) -> str:
    return next(line for line in text.splitlines() if line.strip().startswith(beginning))


def test_sections_stand_in_order() -> None:
    text = page(result())
    places = [text.index(f"\n{name}") if name != SECTIONS[0] else text.index(name) for name in SECTIONS]
    assert places == sorted(places)


def test_the_head_tells_the_verdict_at_the_right_margin() -> None:
    first = page(result()).splitlines()[0]
    assert first.startswith("Valley receiver, rev A, tia")
    assert first.endswith("1 of 2 requirements missed")
    assert width(first) == PAGE


def test_verdicts_in_words() -> None:
    assert verdict(result(requirements=(MET,))) == "every requirement met"
    assert verdict(result(requirements=(MISSED,))) == "1 of 1 requirement missed"
    assert verdict(result(requirements=())) == "no requirement asked"


def test_a_requirement_row_has_bound_figures_and_corner() -> None:
    text = page(result())
    assert re.search(r"bandwidth +≥ 8\.00 MHz +9\.31 MHz +8\.49 MHz +met +U1 GBW low, 60 °C", text)
    assert re.search(r"peaking +≤ 0\.50 dB +0\.02 dB +0\.71 dB +missed +U1 GBW high, C1 low", text)


def test_remedies_stand_under_the_row_that_is_missed() -> None:
    lines = page(result()).splitlines()
    row = next(place for place, line in enumerate(lines) if " missed " in line and "peaking" in line)
    assert lines[row + 1].strip() == "would do: U1 gain bandwidth ≥ 310 MHz, or R1 ≤ 22 kΩ"


def test_colour_adds_nothing_but_colour() -> None:
    plain, coloured = page(result()), page(result(), colour=True)
    assert "\x1b" not in plain
    assert re.sub(r"\x1b\[[0-9;]*m", "", coloured) == plain
    assert next(line for line in coloured.splitlines() if "missed" in line and "peaking" in line).startswith(
        "\x1b[1;31m"
    )


def test_parts_show_fitted_beside_exact_and_the_reason() -> None:
    text = page(result())
    assert line_of(text, "R1").split() == [
        "R1",
        "feedback",
        "24.3",
        "kΩ",
        "24.5",
        "kΩ",
        "±1",
        "%",
        "100",
        "ppm/K",
        "0603",
    ]
    assert line_of(text, "C1").split()[2:8] == ["0.36", "pF", "0.35", "pF", "±0.1", "pF"]
    assert "      2.00 V / 81.6 µA\n" in text
    assert line_of(text, "U1").endswith("HB-OA-400, op amp")


def test_a_place_left_empty_is_said() -> None:
    assert "not fitted" in line_of(page(result(parts=(replace(R1, value=0.0, fitted=False),))), "R1")


def test_shares_are_percentages_and_powers_have_decibels_beside() -> None:
    text = page(result())
    figures = text[text.index("\nFigures") :]
    assert line_of(figures, "overshoot").split() == ["overshoot", "4.3", "%", "0", "%", "11", "%"]
    assert line_of(figures, "sensitivity").endswith("-30.0 dBm")
    assert "undefined" in line_of(figures, "sensitivity")


def test_rounding_names_only_the_figures_that_moved() -> None:
    text = page(result())
    rounding = text[text.index("Rounding") : text.index("Noise")]
    assert "bandwidth 9.22 MHz to 9.31 MHz" in rounding
    assert "overshoot" not in rounding


def test_faults_and_heat_beyond_a_limit_are_words() -> None:
    text = page(result(heat=(replace(result().heat[0], temperature=430.0),)))
    assert "over limit  U1 beyond its current" in text
    assert "too hot" in line_of(text, "U1         120 mW")


def test_lines_keep_to_the_page_and_sentences_are_not_wrapped_in_a_pipe() -> None:
    long = "a caution " * 30
    text = page(result(cautions=(long.strip(),)))
    assert f"  - {long.strip()}\n" in text
    tables = text[: text.index("What the figures mean")]
    assert all(width(line) <= PAGE for line in tables.splitlines() if "caution" not in line)
    assert all(width(line) <= PAGE for line in page(result(cautions=(long.strip(),)), columns=PAGE).splitlines())


def test_more_is_told_where_it_is_asked_for() -> None:
    text = page(result(), verbose=True)
    assert "source: Ohm's law" in text
    assert "sees 160 µW, 2 V at worst; needs 330 µW, 2 V" in text
    assert "R1 = 24.51 kΩ   feedback resistance" in text
    assert "swing 2 V, current 81.6 µA" in text


def test_the_conventions_are_printed() -> None:
    assert "-3 dB electrical" in page(result())


def test_a_bare_result_has_no_empty_sections() -> None:
    text = page(result(requirements=(), heat=(), faults=(), noise=(), assumed=(), cautions=(), roundings=()))
    for absent in ("Requirements", "Heat", "Faults", "Noise", "Assumed", "Cautions", "Rounding"):
        assert f"\n{absent}" not in text
    assert "\n\n\n" not in text
    assert text.endswith("\n")
