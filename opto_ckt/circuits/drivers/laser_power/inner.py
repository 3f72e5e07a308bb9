"""The current loop inside the power loop, by itself: its set voltage is held, as it is at its own frequencies."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np

from opto_ckt.analyses.network import Evaluation, Network
from opto_ckt.analyses.network.expansion import expand
from opto_ckt.circuit import Bench
from opto_ckt.circuits.drivers.current_source import amplifier_errors, filter_resistance, laser_line, surroundings
from opto_ckt.circuits.drivers.laser import lasing
from opto_ckt.circuits.drivers.laser_current import figures, structure
from opto_ckt.circuits.drivers.pass_transistor import pass_transistor
from opto_ckt.circuits.drivers.side import side_of
from opto_ckt.limits import Figures, Lanes, Values
from opto_ckt.parts.transistor import BipolarData
from opto_ckt.request import LaserDriverRequest, LaserPowerRequest

NO_CAPACITOR = 1e-15  #: in place of the soft start's at the set voltage [F]

_compiled: dict[tuple[object, ...], Network] = {}  #: by what the structure depends on


def _network(request: LaserPowerRequest) -> Network:
    """The constant-current driver's network: the same loop, its divider fed from the reference."""
    bipolar = isinstance(request.transistor, BipolarData)
    key = (side_of(request), bipolar, request.signal.enable, request.diode is None)
    if key not in _compiled:
        _compiled[key] = Network(expand(structure.topology(request)))
    return _compiled[key]


def evaluation(values: Values, request: LaserPowerRequest) -> Evaluation:
    """Network functions of the current loop at an operating point."""
    return _network(request).evaluate({**values, "C2": NO_CAPACITOR})


def at_current(values: Values, request: LaserPowerRequest, current: float) -> dict[str, float | Lanes]:
    """Small-signal figures of laser and transistor at a current, whatever asks for it."""
    wide = {name: np.asarray(value, dtype=float) for name, value in values.items()}
    wide |= amplifier_errors(wide, request)
    transistor, flow = pass_transistor(request.transistor), np.asarray(current)
    rail = wide["supply.positive"] - filter_resistance(wide) * current
    line = laser_line(wide, request, flow)
    around = surroundings(wide, request, transistor, line, wide["supply.positive"], rail, side_of(request))
    across = np.maximum(around.across(flow), 0.0)
    return {
        **values,
        **lasing(wide, request, flow),
        **{f"Q1.{name}": value for name, value in transistor.small_signal(wide, flow, across).items()},
        "Q1.drain_current": flow,
    }


def bench_between(request: LaserPowerRequest, bench: Bench, least: float, most: float) -> Bench:
    """A bench whose figures are those of the current loop, each the worse of two currents."""
    nominal = {name: bench.nominal(name) for name in bench.limits}

    def evaluate(chosen: Mapping[str, float | Lanes]) -> Figures:
        both = [_figures({**nominal, **chosen}, request, current) for current in (least, most)]
        return {
            "phase_margin": np.minimum(*(found["phase_margin"] for found in both)),
            "peaking": np.maximum(*(found["peaking"] for found in both)),
            "loop_bandwidth": np.minimum(*(found["loop_bandwidth"] for found in both)),
        }

    return Bench(bench.limits, evaluate)


def _figures(values: Values, request: LaserPowerRequest, current: float) -> Figures:
    biased = at_current(values, request, current)
    return figures.figures(biased, evaluation(biased, request), request)


def on_low_side(request: LaserDriverRequest) -> bool:
    """Whether the current is set at ground."""
    return side_of(request) == "low"


def least_current(request: LaserPowerRequest, bench: Bench) -> float:
    """The least that the loop ever regulates to: the brightest fresh laser, self-heating left out. [A]"""
    data, power = request.source, request.signal.power
    asked = 0.0 if power is None else power.low
    temperatures = np.linspace(bench.low("temperature"), bench.high("temperature"), 9)
    threshold = data.threshold_at(temperatures, bench.low("D1.threshold_current"))
    slope = data.slope_at(temperatures, bench.high("D1.slope_efficiency"))
    return float(np.min(threshold + 0.5 * asked / slope))
