"""Cards of noise generators, from elements that every simulator has."""

from __future__ import annotations

from opto_ckt.formulas.noise_generator import diode_pair_noise, flicker_coefficient, resistance_for_shot_noise
from opto_ckt.outputs.spice_text import card, comment, number

PAIR_CURRENT = 1e-5  #: through each diode of a noise pair [A]
LEAST = 1e-30  #: noise below this is left out


def shot_noise(label: str, current: float, temperature: float, nodes: str) -> str:
    """Shot noise of a standing current between two nodes: a resistor across a 0 V source, copied."""
    if current <= 0:
        return ""
    resistance = float(resistance_for_shot_noise(current=current, temperature=temperature))
    node = f"n{label}"
    return (
        comment("shot noise of the standing currents: R = 2kT/(qI) across 0 V")
        + card(f"r{label}", node, "0", number(resistance))
        + card(f"v{label}", node, "0 dc", "0")
        + card(f"f{label}", nodes, f"v{label}", "1")
    )


def noise_pair(letter: str, density: float, corner: float, temperature: float) -> str:
    """Two equal diodes whose difference voltage is white noise with a 1/f corner and no DC: KF = 2 q fc, AF = 1."""
    if density <= LEAST:
        return card(f"r{letter}a", f"{letter}a 0", "1") + card(f"r{letter}b", f"{letter}b 0", "1")
    flicker = float(flicker_coefficient(corner=corner))
    model = f"d{letter}n"
    return (
        card(f"i{letter}1", f"0 {letter}a dc", number(PAIR_CURRENT))
        + card(f"i{letter}2", f"0 {letter}b dc", number(PAIR_CURRENT))
        + card(f"d{letter}1", f"{letter}a 0", model)
        + card(f"d{letter}2", f"{letter}b 0", model)
        + card(".model", model, f"d(is=1e-14 n=1 kf={number(flicker)} af=1)")
    )


def noise_pair_gain(density: float, temperature: float) -> float:
    """Gain from a pair's difference voltage to the density wanted."""
    if density <= LEAST:
        return 0.0
    return density / float(diode_pair_noise(current=PAIR_CURRENT, temperature=temperature))
