"""A bipolar transistor at its operating point, as the linear network and the decks read it."""

from __future__ import annotations

import numpy as np

from opto_ckt.formulas.transistor import base_emitter_capacitance, bipolar_transconductance
from opto_ckt.limits import Lanes, Values

DRIFT = -2e-3  #: of the base-emitter voltage at a constant current, silicon; common practice [V/K]
LEAST_CAPACITANCE = 1e-15  #: where the sheet's f_T and collector capacitance leave none [F]


def small_signal(
    values: Values, ref: str, collector: float | Lanes, base_emitter: float | Lanes
) -> dict[str, float | Lanes]:
    """Figures of the transistor at a current of its collector [A] and a voltage between base and emitter pins [V]."""
    gain = values[f"{ref}.current_gain"]
    transconductance = bipolar_transconductance(current=collector, temperature=values["temperature"])
    charge = base_emitter_capacitance(
        transconductance=transconductance,
        transition_frequency=values[f"{ref}.transition_frequency"],
        collector=values[f"{ref}.collector_capacitance"],
    )
    base = collector / gain
    return {
        f"{ref}.drain_current": collector,
        f"{ref}.control_current": base,
        f"{ref}.base_emitter": base_emitter,
        f"{ref}.control_voltage": base_emitter - base * values[f"{ref}.base_resistance"],
        f"{ref}.transconductance": transconductance,
        f"{ref}.input_conductance": transconductance / gain,
        f"{ref}.output_conductance": 0.0 * transconductance,
        f"{ref}.control_source_capacitance": np.maximum(charge, LEAST_CAPACITANCE),
        f"{ref}.control_drain_capacitance": values[f"{ref}.collector_capacitance"],
        f"{ref}.channel_noise_factor": 0.5,
    }
