"""What the receiver is at a temperature, a bias and a light: its levels and its figures."""

from __future__ import annotations

from functools import cached_property

import numpy as np

from opto_ckt.analyses import response
from opto_ckt.analyses.network import Evaluation
from opto_ckt.circuit import OnDemand, Refusal
from opto_ckt.circuits.receivers import refusals
from opto_ckt.circuits.receivers.board import dc_load, exactly, load_limits, stray
from opto_ckt.circuits.receivers.detector import MIDBAND, detector_limits, level_factor, midband, wanted_bandwidth
from opto_ckt.circuits.receivers.feed import bias_limit, fed
from opto_ckt.circuits.receivers.figures import OFFERS as RECEIVER_OFFERS
from opto_ckt.circuits.receivers.figures import ReceiverFigures
from opto_ckt.circuits.receivers.tia_fixed.structure import passes_dc
from opto_ckt.formulas.fixed_tia import density_from_rms, peak_to_peak_factor
from opto_ckt.limits import Figures, Lanes, Limit, Requirement, Values
from opto_ckt.request import FixedTiaRequest
from opto_ckt.units import write

OFFERS = tuple(name for name in RECEIVER_OFFERS if name != "phase_margin")
SENSING = 1.0  #: of the input: a virtual ground; the sheet's bandwidth holds with the detector there [Ω]


def given(request: FixedTiaRequest) -> dict[str, Limit]:
    """Board, load, bias supply; noise as a density where the sheet states an rms current."""
    limits = {
        **detector_limits(request),
        "CB": stray(request.conditions.board_capacitance),
        **load_limits(request),
        "supply.bias": bias_limit(request),
        "U1.input_resistance": exactly(SENSING),
    }
    if request.fixed_tia.input_noise is not None:
        noise, bandwidth = request.limits("fixed_tia")["input_noise"], request.fixed_tia.bandwidth.nominal
        ends = [float(density_from_rms(noise=each, bandwidth=bandwidth)) for each in noise[:3]]
        limits["U1.input_noise_density"] = Limit(ends[0], ends[1], ends[2], noise[3])
    return limits


def bias(values: Values, request: FixedTiaRequest) -> dict[str, float | Lanes]:
    """The detector in its feed; the output at DC where the amplifier passes it."""
    level = request.conditions.input_level
    found = {**values, **fed(values, request, level)}
    current = found["D1.responsivity"] * found["signal.power"] + found["D1.ambient_current"] + found["D1.dark_current"]
    sign = 1.0 if request.detector.output == "cathode" else -1.0
    driven = sign * current * values["U1.transimpedance"] if passes_dc(request) else 0.0 * current
    return {**found, "node.amp": driven / (1 + values["U1.output_resistance"] / dc_load(values, request))}


class FixedFigures(ReceiverFigures):
    """The receiver's figures; overload is what the sheet states of the input."""

    _request: FixedTiaRequest

    @cached_property
    def overload(self) -> Lanes:
        """Average power at which the swing of the light's current reaches the sheet's overload. [W]"""
        most, values, request = self._values["U1.overload_current"], self._values, self._request
        if passes_dc(request):
            left = most - values["D1.ambient_current"] - values["D1.dark_current"]
            factor = level_factor(request)
        else:
            left = most * np.ones(self._evaluation.lanes)
            ratio = request.signal.extinction_ratio
            factor = float(peak_to_peak_factor(extinction_ratio=ratio)) if request.signal.bit_rate else 2.0
        return np.asarray(np.maximum(left, 0.0) / (self._responsivity * factor))

    @cached_property
    def _reference(self) -> Lanes | None:
        """Magnitude of the gain in midband where DC does not pass. [V/W]"""
        frequency = midband(self._request)
        if frequency is None and not passes_dc(self._request):
            frequency = MIDBAND * (wanted_bandwidth(self._request) or 1e6)
        return None if frequency is None else np.abs(response.transfer_at(self._evaluation, frequency))


def figures(values: Values, evaluation: Evaluation, request: FixedTiaRequest) -> Figures:
    """Every figure that the receiver offers, each computed when it is asked for."""
    return OnDemand(FixedFigures(values, evaluation, request, headroom=np.inf, dark_shift=0.0), OFFERS)


def implied(request: FixedTiaRequest) -> tuple[Requirement, ...]:
    """The light must not reach the overload of the amplifier."""
    most = request.signal.power.high
    return (Requirement("overload", "min", most, most),)


def refused(request: FixedTiaRequest) -> tuple[Refusal, ...]:
    """A detector with more capacitance than the amplifier's figures hold for; a supply that it does not run from."""
    found = [
        refusal
        for refusal in refusals.refused(request)
        if passes_dc(request) or refusal.path[-1] not in refusals.WITHOUT_DC
    ]
    data, amplifier = request.detector, request.fixed_tia
    capacitance = float(data.capacitance_at(data.resting_bias)) + request.conditions.board_capacitance
    if capacitance > amplifier.input_capacitance_max:
        allowed = write(amplifier.input_capacitance_max, "F")
        message = f"{write(capacitance, 'F')} with the board: the figures of fixed_tia hold up to {allowed}"
        found.append(Refusal(("detector",), message))
    supply = request.conditions.supply
    least, most = (supply.total * (1 + side * supply.tolerance) for side in (-1, 1))
    if amplifier.supply_max is not None and most > amplifier.supply_max:
        end = write(amplifier.supply_max, "V")
        found.append(
            Refusal(("conditions", "supply"), f"up to {write(most, 'V')} is above supply_max {end} of fixed_tia")
        )
    if amplifier.supply_min is not None and least < amplifier.supply_min:
        end = write(amplifier.supply_min, "V")
        message = f"down to {write(least, 'V')} is below supply_min {end} of fixed_tia"
        found.append(Refusal(("conditions", "supply"), message))
    return tuple(found)
