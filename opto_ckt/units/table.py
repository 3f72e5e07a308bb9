"""The table of units: how each is spelt, written and kept."""

from __future__ import annotations

from collections.abc import Mapping
from functools import cache, partial

from opto_ckt.constants import ZERO_CELSIUS
from opto_ckt.units.unit import Scale, Step, Unit, engineering, plain, prefixed, quotient, single

KELVINS = plain("K", "°C", "degC")
KELVINS_SQUARED = plain("K²", "K^2", "°C²", "°C^2")
ROOT_HERTZ = plain(
    "√Hz", "√(Hz)", "rtHz", "rt(Hz)", "sqrtHz", "sqrt(Hz)", "Hz^0.5", "Hz^(1/2)", "Hz^1/2", "Hz½"
)  # fmt: skip
SECONDS = prefixed("s", of="fpnuµm")
RATIOS = {**plain("%", exponent=-2), **plain("ppm", exponent=-6), **plain("ppb", exponent=-9)}
PER = {"": (1, 0), "1": (1, 0), **RATIOS}


def _kelvin_from_celsius(figure: float) -> float:
    return figure + ZERO_CELSIUS


def _kelvin(figure: float) -> float:
    return figure


def _watt_from_dbm(figure: float) -> float:
    return 1e-3 * float(10 ** (figure / 10))


def _power_ratio(figure: float) -> float:
    return float(10 ** (figure / 10))


def _amplitude_ratio(figure: float) -> float:
    return float(10 ** (figure / 20))


def _lengths() -> dict[str, Scale]:
    return {**prefixed("m"), "cm": (1, -2)}


def _areas() -> dict[str, Scale]:
    squared = ("m²", "m^2", "m2")
    return {**prefixed(*squared, of="nuµmk", power=2), **{f"c{symbol}": (1, -4) for symbol in squared}}


def _times() -> dict[str, Scale]:
    return {**SECONDS, "min": (60, 0), "h": (3600, 0)}


def _simple(*symbols: str, of: str = "fpnuµmkMGT") -> partial[dict[str, Scale]]:
    return partial(prefixed, *symbols, of=of)


def _over(above: Mapping[str, Scale], below: Mapping[str, Scale]) -> partial[dict[str, Scale]]:
    return partial(quotient, above, below)


def _transimpedances() -> dict[str, Scale]:
    return {**quotient(prefixed("V"), prefixed("A", of="nuµm")), **prefixed("Ω", "ohm", "Ohm", of="mkMGT")}


def _transconductances() -> dict[str, Scale]:
    return {**quotient(prefixed("A", of="nuµm"), prefixed("V", of="m")), **prefixed("S", of="nuµm")}


def _detectivities() -> dict[str, Scale]:
    return {"m·√Hz/W": (1, 0), "cm·√Hz/W": (1, -2), "m*sqrt(Hz)/W": (1, 0), "cm*sqrt(Hz)/W": (1, -2)}


def _gains() -> dict[str, Scale]:
    return {"": (1, 0), **quotient(prefixed("V", of="uµmk"), prefixed("V", of="uµm"))}


def _power_ratios() -> dict[str, Scale]:
    return {"": (1, 0), "%": (1, -2), **quotient(prefixed("W", of="nuµm"), prefixed("W", of="nuµm"))}


_VOLTS = prefixed("V", of="fpnuµmk")
_AMPERES = prefixed("A", of="fpnuµmk")
_WATTS = prefixed("W", of="fpnuµmk")

UNITS: Mapping[str, Unit] = {
    "V": Unit("V", "3.3 V", _simple("V"), engineering("V", "n")),
    "A": Unit("A", "20 mA", _simple("A"), engineering("A")),
    "W": Unit("W", "2 µW", _simple("W"), engineering("W"), curves={"dBm": _watt_from_dbm}),
    "Hz": Unit("Hz", "230 MHz", _simple("Hz", of="uµmkMGT"), engineering("Hz", "m")),
    "s": Unit("s", "5 ns", _times, engineering("s", largest="")),
    "F": Unit("F", "4.7 pF", _simple("F", of="fpnuµm"), engineering("F", "p", "")),
    "Ω": Unit("Ω", "10 kΩ", _simple("Ω", "ohm", "Ohm", "ohms", "Ohms", of="uµmkMGT"), engineering("Ω", "m")),
    "H": Unit("H", "10 µH", _simple("H", of="pnuµm"), engineering("H", "p", "")),
    "m": Unit("m", "1310 nm", _lengths, (
        Step("pm", -12, 1e-12), Step("nm", -9, 1e-9), Step("µm", -6, 3e-6), *engineering("m", "m", "k"),
    )),
    "m²": Unit("m²", "0.2 mm²", _areas, (Step("µm²", -12, 0.0), Step("mm²", -6, 1e-8), Step("m²", 0, 1e-1))),
    "K": Unit("K", "10 K", _simple("K", of="m"), single("K")),
    "°C": Unit("K", "25 °C", dict, single("°C"), curves={
        "°C": _kelvin_from_celsius, "degC": _kelvin_from_celsius, "K": _kelvin,
    }),
    "K/W": Unit("K/W", "150 K/W", _over(KELVINS, prefixed("W", of="m")), single("K/W")),
    "V/√Hz": Unit("V/√Hz", "6.5 nV/√Hz", _over(_VOLTS, ROOT_HERTZ), engineering("V/√Hz", largest="k")),
    "A/√Hz": Unit("A/√Hz", "2 pA/√Hz", _over(_AMPERES, ROOT_HERTZ), engineering("A/√Hz", largest="k")),
    "W/√Hz": Unit("W/√Hz", "5 pW/√Hz", _over(_WATTS, ROOT_HERTZ), engineering("W/√Hz", largest="k")),
    "m·√Hz/W": Unit("m·√Hz/W", "1e9 m·√Hz/W", _detectivities, (Step("cm·√Hz/W", -2, 0.0),)),
    "A/W": Unit("A/W", "0.9 A/W", _over(_AMPERES, _WATTS), (Step("mA/W", -3, 0.0), Step("A/W", 0, 1e-2))),
    "W/A": Unit("W/A", "0.3 W/A", _over(_WATTS, _AMPERES), (Step("mW/A", -3, 0.0), Step("W/A", 0, 1e-2))),
    "A/V": Unit("A/V", "40 mA/V", _transconductances, engineering("A/V", "n", "")),
    "V/A": Unit("V/A", "24 kV/A", _transimpedances, engineering("V/A", "m", "M")),
    "V/s": Unit("V/s", "310 V/µs", _over(_VOLTS, SECONDS), (
        Step("mV/s", -3, 0.0), Step("V/s", 0, 1.0), Step("V/µs", 6, 1e4),
    )),
    "V/K": Unit("V/K", "2 mV/K", _over(_VOLTS, KELVINS), engineering("V/K", "n", "")),
    "m/K": Unit("m/K", "0.3 nm/K", _over(prefixed("m", of="fpnuµm"), KELVINS), (
        Step("pm/K", -12, 0.0), Step("nm/K", -9, 1e-11), Step("µm/K", -6, 1e-6),
    )),
    "1/K": Unit("1/K", "100 ppm/K", _over(PER, KELVINS), (Step("ppm/K", -6, 0.0), Step("%/K", -2, 1e-3))),
    "1/K²": Unit("1/K²", "80 ppm/K²", _over(PER, KELVINS_SQUARED), (Step("ppm/K²", -6, 0.0), Step("%/K²", -2, 1e-3))),
    "C": Unit("C", "2 nC", _simple("C", of="fpnuµm"), engineering("C", largest="")),
    "J": Unit("J", "20 µJ", _simple("J"), engineering("J")),
    "bit/s": Unit("bit/s", "10 Mbit/s", _simple("bit/s", "b/s", "bps", of="kMGT"), engineering("bit/s", "")),
    "V/V": Unit("1", "10 V/V or 20 dB", _gains, single("V/V"), bare=True, curves={"dB": _amplitude_ratio}),
    "W/W": Unit("1", "10 or 10 dB", _power_ratios, single(""), bare=True, curves={"dB": _power_ratio}),
    "dB": Unit("dB", "3 dB", partial(plain, "dB"), single("dB"), decimals=True),
    "dB/K": Unit("dB/K", "-0.02 dB/K", _over(prefixed("dB", of="m"), KELVINS), single("dB/K")),
    "dB/Hz": Unit("dB/Hz", "-140 dB/Hz", partial(plain, "dB/Hz", "dBc/Hz"), single("dB/Hz"), decimals=True),
    "1": Unit("1", "0.05 or 5 %", lambda: {"": (1, 0), **RATIOS}, single(""), bare=True),
    "°": Unit("°", "65°", partial(plain, "°", "deg"), single("°")),
}  # fmt: skip


def known(unit: str) -> bool:
    """Whether values can be read and written in a unit.

    >>> known("V/√Hz"), known("furlong")
    (True, False)
    """
    return unit in UNITS


def si_unit(unit: str) -> str:
    """The unit in which the number stands inside and in machine-readable output.

    Raises KeyError for a unit that is not in the table.

    >>> si_unit("°C"), si_unit("V/V"), si_unit("Ω")
    ('K', '1', 'Ω')
    """
    return UNITS[unit].si


@cache
def spellings(unit: str) -> Mapping[str, Scale]:
    """Every spelling of a unit that is a plain factor, with that factor."""
    return UNITS[unit].spellings()


@cache
def folded(unit: str) -> Mapping[str, tuple[str, ...]]:
    """The spellings of a unit by their lower case: what a text in the wrong case may have meant."""
    found: dict[str, list[str]] = {}
    for spelling in (*spellings(unit), *UNITS[unit].curves):
        found.setdefault(spelling.lower(), []).append(spelling)
    return {lower: tuple(same) for lower, same in found.items()}
