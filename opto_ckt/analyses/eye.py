"""Eye of a data signal, from poles and residues: how much of a step the worst pattern of bits leaves open."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from opto_ckt.analyses.network import Evaluation

Array = NDArray[np.float64]

INSTANTS = 32  #: of a bit at which it may be decided
FAINT = 1e-5  #: share of the largest below which what earlier bits left counts no more
LONGEST = 400  #: bits that are followed at most


def opening(evaluation: Evaluation, bit: float, run: int = LONGEST, reference: Array | float | None = None) -> Array:
    """Least distance of ones from zeros at the best instant, as a share of the full step; negative: the eye is shut.

    Parameters
    ----------
    bit : length of a bit. [s]
    run : most equal bits in a row; earlier bits than these are taken to balance.
    reference : magnitude of the gain that is the full step; DC if None. [V per unit of input]

    Returns
    -------
    nan where the network is unstable.

    Notes
    -----
    Of the response p to one bit, sampled each bit, the largest sample less the magnitudes of all others: the peak
    distortion of R. W. Lucky, 1965. Exact exponentials; the instant is the best of `INSTANTS` of a bit, the last at its
    end.
    """
    modes = evaluation.modes
    period = bit * evaluation.frequency_scale
    instants = period * (np.arange(INSTANTS)[:, None] + 1.0) / INSTANTS
    poles = np.where(np.isnan(modes.poles), -1.0, modes.poles)
    weights = np.where(poles.imag > 0, 2.0, np.where(poles.imag < 0, 0.0, 1.0))
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        late = [(residue * weight) * np.exp(pole * instants)
                for pole, residue, weight in zip(poles, modes.residues, weights, strict=True)]  # fmt: skip
        sample = modes.constant + sum((mode.real for mode in late), np.zeros_like(instants))
        level = modes.constant if reference is None else np.copysign(reference, _farthest(sample))
        sample = sample / level
        largest, total = sample, np.abs(sample)
        a_bit = np.exp(poles * period)
        late = [mode * (step - 1) for mode, step in zip(late, a_bit, strict=True)]
        for _ in range(min(run, LONGEST)):
            sample = sum((mode.real for mode in late), np.zeros_like(instants)) / level
            total = total + np.abs(sample)
            largest = np.maximum(largest, sample)
            if not (np.abs(sample) > FAINT).any():
                break
            late = [mode * step for mode, step in zip(late, a_bit, strict=True)]
    return np.where(evaluation.stable, (2 * largest - total).max(axis=0), np.nan)


def _farthest(sample: Array) -> Array:
    """Of each lane the sample that lies farthest from zero: it has the sign of the step."""
    return np.asarray(np.take_along_axis(sample, np.abs(sample).argmax(axis=0)[None, :], axis=0)[0])
