"""C1 of a transimpedance stage: its window between ringing and too slow or unstable, and its place in it."""

from __future__ import annotations

from collections.abc import Sequence
from itertools import product
from math import inf, isfinite
from typing import NamedTuple

import numpy as np

from opto_ckt.circuit import Bench, Fitted
from opto_ckt.circuits.receivers.detector import stage_bandwidth
from opto_ckt.circuits.receivers.feedback.stage import Stage, part_tolerance
from opto_ckt.errors import InfeasibleError
from opto_ckt.formulas import second_order, transimpedance
from opto_ckt.limits import Lanes
from opto_ckt.request import ReceiverRequest
from opto_ckt.units import write

SCAN = np.geomspace(1 / 20, 20, 121)  #: total C_f tried at nominal, every other at corners, re the closed form
DECIDES = ("U1.gain_bandwidth", "U1.second_pole", "D1.capacitance")  #: limits whose combinations make the corners
LOADS = ("D1.capacitance", "U1.common_capacitance", "U1.differential_capacitance", "CB")  #: of the summing node
ALLOWED_PEAKING = float(second_order.peaking(quality=1.0))  #: where nothing is asked for: 1.25 dB


class Damped(NamedTuple):
    """C1, and what it leaves."""

    fitted: Fitted
    overshoot: float  #: at the worst corner
    windowed: bool  #: some C1 both damps and keeps the bandwidth at every corner


def feedback_capacitor(stage: Stage, resistance: float) -> Damped:
    """C1 for the wanted Q on the whole network, moved into its window.

    Raises
    ------
    InfeasibleError : what damps the response is more than a decompensated op amp stands.
    """
    request, bench, quality, capacitance = stage.request, stage.bench, stage.quality, stage.input_capacitance
    series, stray = request.preferred.capacitors.series, bench.nominal("CS")
    gain_bandwidth = bench.nominal("U1.gain_bandwidth")
    with np.errstate(invalid="ignore"):
        closed_form = transimpedance.feedback_capacitance(
            feedback_resistance=resistance,
            input_capacitance=capacitance,
            gain_bandwidth=gain_bandwidth,
            quality=quality,
        )
    total = max(float(np.nan_to_num(closed_form)), stray)
    scanned = np.maximum(total * SCAN, stray)
    found = bench.evaluate({**stage.resistors(resistance), **stage.others, **stage.capacitors(scanned - stray)})
    wanted = _where_quality(scanned, found["quality_factor"], quality)
    corners = _Corners(stage, resistance)
    low, high = _window(request, corners, scanned[::2])
    stable = _largest_stable(stage, resistance, scanned)
    if low > stable and isfinite(low):
        raise _unstable(bench, capacitance, low, stable)
    high = min(high, stable)
    aim = min(max(wanted, low), high) if low <= high else min(low if isfinite(low) else wanted, stable)
    overshoot = min(float(corners.worst(np.array([aim]), ("overshoot",))["overshoot"][1][0]), 1.0)
    fixed = stage.fixed("C1")
    if fixed is not None:
        return Damped(Fitted("C1", fixed, series, fixed=True), overshoot, True)
    reason = _reason(quality, (wanted, total, aim), (low, high), stray, stage.smallest)
    stage.derivation.compute(
        "C1",
        transimpedance.feedback_capacitance,
        reason=reason,
        feedback_resistance=resistance,
        input_capacitance=capacitance,
        gain_bandwidth=gain_bandwidth,
        quality=quality,
    )
    exact = max(aim - stray, 0.0)
    bare = exact < stage.smallest
    part = Fitted("C1", exact, series, low=0.0 if bare else exact / 2, high=stable - stray, omittable=bare)
    return Damped(part, overshoot, low <= high)


def _reason(
    quality: float,
    totals: tuple[float, float, float],
    window: tuple[float, float],
    stray: float,
    smallest: float,
) -> str:
    wanted, closed_form, aim = totals
    low, high = (write(max(edge - stray, 0.0), "F") if isfinite(edge) else "open" for edge in window)
    ends = f"{low} … {high}" if window[1] > 0 else f"{low} … none that keeps the bandwidth"
    said = f"Q = {quality:.3g}"
    if abs(wanted / closed_form - 1) > 0.02:
        said += f" ({write(wanted, 'F')} in all with second pole and load, {write(closed_form, 'F')} with one pole)"
    if abs(aim / wanted - 1) > 0.02:
        said += ", moved into its window"
    said += f"; window over corners {ends}; {write(stray, 'F')} more is stray"
    if aim - stray < smallest:
        said += "; no more than bare pads: not to be built as a part"
    return said if window[0] <= window[1] else said + "; the window is empty"


def _unstable(bench: Bench, capacitance: float, low: float, stable: float) -> InfeasibleError:
    gain = bench.nominal("U1.minimum_stable_gain")
    return InfeasibleError(
        f"C_f would have to be at least {write(low, 'F')} against peaking, and at most {write(stable, 'F')} for the"
        f" minimum stable gain {gain:.3g} of U1",
        [
            f"minimum stable gain of U1 ≤ {1 + capacitance / low:.3g}",
            f"{write(max((gain - 1) * low - capacitance, 0.0), 'F')} more from summing node to ground",
        ],
    )


class _Corners:
    """The circuit at every combination of the limits that decide, C1 and strays at both ends of their spread."""

    def __init__(self, stage: Stage, resistance: float) -> None:
        self._stage = stage
        bench = self._bench = stage.bench
        self._fixed = {**stage.resistors(resistance), **stage.others}
        self._stray = bench.nominal("CS")
        self._decides = (*DECIDES, *stage.decides)
        self._settings = list(product(*((bench.low(name), bench.high(name)) for name in self._decides)))

    def worst(self, totals: Lanes, names: Sequence[str]) -> dict[str, tuple[Lanes, Lanes]]:
        """Least and greatest of each figure over the corners, for each total C_f."""
        fitted = totals - self._stray
        tolerance = part_tolerance(self._stage, fitted)
        ends = np.maximum([fitted - tolerance, fitted + tolerance], 0.0)
        strays = np.repeat([self._bench.low("CS"), self._bench.high("CS")], len(totals))
        count = len(self._settings)
        lanes = {name: np.repeat([s[i] for s in self._settings], ends.size) for i, name in enumerate(self._decides)}
        parts = self._stage.capacitors(np.tile(ends.ravel(), count))
        found = self._bench.evaluate({**self._fixed, **lanes, **parts, "CS": np.tile(strays, count)})
        shape = (2 * len(self._settings), len(totals))
        return {
            name: (
                np.nan_to_num(found[name], nan=-inf).reshape(shape).min(axis=0),
                np.nan_to_num(found[name], nan=inf).reshape(shape).max(axis=0),
            )
            for name in names
        }


def _window(request: ReceiverRequest, corners: _Corners, totals: Lanes) -> tuple[float, float]:
    """Least total C_f that damps, and largest that keeps the bandwidth, over the corners. [F]"""
    worst = corners.worst(totals, ("peaking", "phase_margin", "bandwidth"))
    require = request.require
    peaking = require["peaking"].max if "peaking" in require else None
    margin = require["phase_margin"].min if "phase_margin" in require else None
    damped = np.flatnonzero(
        (worst["peaking"][1] <= (ALLOWED_PEAKING if peaking is None else peaking))
        & (worst["phase_margin"][0] >= (margin or 0.0))
    )
    low = float(totals[damped[0]]) if len(damped) else inf
    bandwidth = stage_bandwidth(request)
    if bandwidth is None:
        return low, inf
    wide = np.flatnonzero(worst["bandwidth"][0] >= bandwidth)
    return low, float(totals[wide[-1]]) if len(wide) else 0.0


def _largest_stable(stage: Stage, resistance: float, totals: Lanes) -> float:
    """Total C_f above which a decompensated op amp is below its minimum stable gain at its worst corner. [F]"""
    bench, gain = stage.bench, stage.bench.nominal("U1.minimum_stable_gain")
    if gain <= 1:
        return inf
    fitted = totals - bench.nominal("CS")
    least = {name: bench.low(name) for name in LOADS}
    values = {**stage.resistors(resistance), **stage.others, **least}
    most = stage.capacitors(np.maximum(fitted + part_tolerance(stage, fitted), 0.0))
    found = bench.evaluate({**values, **most, "CS": bench.high("CS")})["noise_gain"]
    kept = np.flatnonzero(found >= gain)
    return float(totals[kept[-1]]) if len(kept) else 0.0


def _where_quality(tried: Lanes, qualities: Lanes, wanted: float) -> float:
    """First C_f, from small to large, at which the largest Q is down to the wanted one; else the one of least Q."""
    known = np.nan_to_num(qualities, nan=inf)
    below = np.flatnonzero(known <= wanted)
    if not len(below):
        return float(tried[int(np.argmin(known))])
    index = int(below[0])
    if index == 0 or not isfinite(known[index - 1]):
        return float(tried[index])
    share = (known[index - 1] - wanted) / (known[index - 1] - known[index])
    return float(tried[index - 1] * (tried[index] / tried[index - 1]) ** share)
