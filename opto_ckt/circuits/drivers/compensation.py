"""C1 of the constant-current laser driver: a window between ringing and too slow, and its place in it."""

from __future__ import annotations

from collections.abc import Mapping
from itertools import product
from math import inf

import numpy as np
from numpy.typing import NDArray

from opto_ckt.circuit import Bench, Fitted
from opto_ckt.circuits.drivers.requests import LoopRequest
from opto_ckt.derivation import Derivation
from opto_ckt.errors import InfeasibleError
from opto_ckt.formulas import driver_loop
from opto_ckt.limits import Lanes, Limit
from opto_ckt.request.reading import Limit as AskedLimit
from opto_ckt.units import write

SCAN = np.geomspace(1 / 100, 30, 29)  #: C1 tried, as multiples of the closed form
ALLOWED_PEAKING, LEAST_MARGIN = 0.5, 45.0
"""At the worst corner, where nothing is asked for: common practice [dB, °]"""

MARGIN_STEP, PEAKING_STEP = 10.0, 2.0
"""What weighs as much as a bandwidth wider by e: the peaking rises steeply once it begins [°, dB]"""

REACH = 1.3  #: candidates lie so many times above and below the exact value at most

DECIDES = (
    "Q1.transconductance", "Q1.input_capacitance", "Q1.transition_frequency", "Q1.current_gain",
    "U1.gain_bandwidth", "U1.second_pole", "U1.output_resistance",
)  # fmt: skip
"""Limits whose combinations make the corners of the loop; of a bipolar transistor the temperature as well."""


def compensation(
    request: LoopRequest,
    derivation: Derivation,
    bench: Bench,
    others: Mapping[str, float],
    require: Mapping[str, AskedLimit] | None = None,
) -> Fitted:
    """C1 at which the least of all margins over the corners is largest: of phase, of peaking, of speed where asked for.

    ``require`` stands for what the design file asks of this loop, where its own names mean another one.

    Raises
    ------
    InfeasibleError : no C1 makes the loop stable.
    """
    series, lead = request.preferred.capacitors.series, others["R4"]
    if "C1" in request.fixed:
        derivation.note("C1", "fixed in the design file")
        return Fitted("C1", request.fixed["C1"], series, fixed=True)
    asked = request.require if require is None else require
    required = asked.get("loop_bandwidth")
    wanted = (required.min or 0.0) if required is not None else 0.0
    start_bandwidth = wanted or bench.nominal("U1.gain_bandwidth") / 20
    start = driver_loop.compensation_capacitance(compensation_resistance=lead, bandwidth=start_bandwidth)
    tried = float(start) * SCAN
    margin, peaking, bandwidth = _worst(bench, tried, others)
    if not (margin > 0).any():
        raise InfeasibleError(
            "no C1 makes the loop stable at every corner", ["U1 second pole higher", "Q1 input capacitance lower"]
        )
    least = _asked(asked, "phase_margin", LEAST_MARGIN)
    spare = np.minimum((margin - least) / MARGIN_STEP, (_allowed(asked) - peaking) / PEAKING_STEP)
    if wanted:
        spare = np.minimum(spare, np.log(np.maximum(bandwidth, 1e-9) / wanted))
    first, last = _longest_run(spare >= 0)
    tolerance, aim = request.preferred.capacitors.tolerance, float(tried[int(np.argmax(spare))])
    low, high = 0.0, inf
    if last < first:
        said = "the window over corners is empty, this comes nearest"
    else:
        low, high = float(tried[first]) * (1 + tolerance), float(tried[last]) / (1 + tolerance)
        low = low if first else 0.0
        edges = " … ".join(
            "open" if at_end else write(edge, "F")
            for at_end, edge in ((first == 0, low), (last == len(tried) - 1, high))
        )
        said = f"window over corners {edges}: too little rings, too much is slow; here the least margin is largest"
        low, high = max(low, aim / REACH), min(high, aim * REACH)
    derivation.compute(
        "C1", driver_loop.compensation_capacitance, reason=said,
        compensation_resistance=lead, bandwidth=1 / (2 * np.pi * lead * aim),
    )  # fmt: skip
    return Fitted("C1", aim, series, low=low, high=high)


def _longest_run(good: NDArray[np.bool_]) -> tuple[int, int]:
    """First and last index of the longest run of what is good; the last ahead of the first where nothing is."""
    best, begun = (0, -1), 0
    for index, each in enumerate(good):
        if not each:
            begun = index + 1
        elif index - begun > best[1] - best[0]:
            best = (begun, index)
    return best


def _asked(asked: Mapping[str, AskedLimit], name: str, otherwise: float) -> float:
    limit = asked.get(name)
    return otherwise if limit is None or limit.min is None else limit.min


def _allowed(asked: Mapping[str, AskedLimit]) -> float:
    limit = asked.get("peaking")
    return ALLOWED_PEAKING if limit is None or limit.max is None else limit.max


def _worst(bench: Bench, tried: Lanes, others: Mapping[str, float]) -> tuple[Lanes, Lanes, Lanes]:
    """Least phase margin, most peaking and least bandwidth over the corners of the loop, along the values of C1."""
    decides = (*DECIDES, *(["temperature"] if "Q1.current_gain" in bench.limits else []))
    names = [name for name in decides if isinstance(bench.limits.get(name), Limit) and bench.limits[name].varies]
    corners = [*product(*((bench.low(name), bench.high(name)) for name in names)), [bench.nominal(n) for n in names]]
    lanes = {name: np.repeat([corner[i] for corner in corners], len(tried)) for i, name in enumerate(names)}
    found = bench.evaluate({**others, **lanes, "C1": np.tile(tried, len(corners))})
    shape = (len(corners), len(tried))
    margin = np.nan_to_num(found["phase_margin"], nan=-inf).reshape(shape).min(axis=0)
    peaking = np.nan_to_num(found["peaking"], nan=inf).reshape(shape).max(axis=0)
    bandwidth = np.nan_to_num(found["loop_bandwidth"], nan=0.0).reshape(shape).min(axis=0)
    return margin, peaking, bandwidth
