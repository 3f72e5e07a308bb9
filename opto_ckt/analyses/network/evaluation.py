"""What evaluating a network gives: polynomials in scaled s, on lanes, and what follows from them alone."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from functools import cached_property
from typing import Any

import numpy as np
from numpy.typing import NDArray

from opto_ckt.analyses.network.hurwitz import hurwitz_moments
from opto_ckt.analyses.network.lanes import Array, Complex, horner, over_points
from opto_ckt.analyses.network.modes import Modes, modes_of, poles_of
from opto_ckt.analyses.network.scan import scan_points
from opto_ckt.analyses.network.step import shape


@dataclass(frozen=True)
class Generators:
    """What each noise generator of a network does at its output.

    Parameters
    ----------
    labels : one a generator.
    white : for each generator its white density × |transfer numerator|², a polynomial in x, the square of scaled ω;
        over |D|² this is its white noise at the output. [V²/Hz]
    corners : 1/f corner of each generator, zero where it is white; shape (generators, lanes). [Hz]
    """

    labels: tuple[str, ...]
    white: tuple[Array, ...]
    corners: Array


@dataclass(frozen=True, eq=False)
class Evaluation:
    """Network functions of every lane, as polynomials in s / frequency_scale, lowest order first.

    Parameters
    ----------
    lanes : how many.
    frequency_scale : what s is divided by. [rad/s]
    extent : scaled ω between which all roots of D lie.
    denominator, numerator : D and N; N/D is the output voltage for an input signal of 1. [V per unit of input]
    loop_numerator, loop_denominator : D - D0 and D0 where D0 is D with the loop open; None without a loop.
        T = (D - D0) / D0 is the return ratio, large and positive at DC under negative feedback.
    denominator_power, numerator_power, loop_excess : |D|², |N|² and |D - D0|² - |D0|² as polynomials in x, the square
        of scaled ω.
    rival_numerator : N of the other input, over the same D; None where there is none.
    gain : current of the input source for an input signal of 1. [A per unit of input]
    read_noise : gives the sums over all generators of white and of 1/f noise.
    read_generators : gives the noise generators one by one.
    at : gives the same network at other values.
    """

    lanes: int
    frequency_scale: float
    extent: tuple[float, float]
    denominator: Array
    numerator: Array
    loop_numerator: Array | None
    loop_denominator: Array | None
    rival_numerator: Array | None
    denominator_power: Array
    numerator_power: Array
    loop_excess: Array | None
    gain: Array
    read_noise: Callable[[], list[Array]]
    read_generators: Callable[[], Generators]
    at: Callable[[Mapping[str, Any]], Evaluation]

    @property
    def order(self) -> int:
        """Order of D, the largest of any lane."""
        return len(self.denominator) - 1

    @cached_property
    def noise(self) -> tuple[Array, Array]:
        """White noise [V²/Hz] and 1/f noise × f [V²] at the output, times |D|²: polynomials in x."""
        white, flicker = self.read_noise()
        return white, flicker

    @cached_property
    def generators(self) -> Generators:
        """Noise generators, evaluated when first asked for."""
        return self.read_generators()

    @cached_property
    def _hurwitz(self) -> tuple[Array, NDArray[np.bool_]]:
        return hurwitz_moments(self.denominator)

    @property
    def moments(self) -> Array:
        """Integrals of ω^2k / |D|² over scaled ω from zero to infinity, by k; nan where a lane is unstable."""
        return self._hurwitz[0]

    @property
    def stable(self) -> NDArray[np.bool_]:
        """Whether all poles of a lane lie in the left half-plane."""
        return self._hurwitz[1]

    @cached_property
    def scaled_poles(self) -> Complex:
        """Roots of D in scaled s; shape (order, lanes), nan past a lane's own order."""
        return poles_of(self.denominator)

    @cached_property
    def modes(self) -> Modes:
        """Constant, poles and residues of the step response in scaled time."""
        return modes_of(self.denominator, self.numerator, self.scaled_poles)

    @cached_property
    def step_shape(self) -> tuple[Array, Array]:
        """Rise time, in scaled time, and overshoot of the step response, re its final value."""
        return shape(self.modes)

    @cached_property
    def scan(self) -> Array:
        """Scan points x, the square of scaled ω, that cover every root of D."""
        return scan_points(self.extent, self.frequency_scale)

    @cached_property
    def scanned_denominator(self) -> Array:
        """|D|² at the scan points; shape (points, lanes)."""
        return over_points(self.denominator_power, self.scan)

    @cached_property
    def scanned_response(self) -> Array:
        """|N/D|² at the scan points; shape (points, lanes)."""
        return over_points(self.numerator_power, self.scan) / self.scanned_denominator

    def frequency(self, x: Array) -> Array:
        """Frequency in Hz of the square x of scaled ω."""
        return np.asarray(np.sqrt(x) * (self.frequency_scale / (2 * np.pi)))

    def scaled(self, frequency: Array | float) -> Complex:
        """Scaled s at a frequency in Hz."""
        return np.asarray(2j * np.pi / self.frequency_scale * np.asarray(frequency), dtype=complex)

    def ratio_at(self, numerator: Array, denominator: Array, frequency: Array | float) -> Complex:
        """Ratio of two polynomials at a frequency in Hz; shape of `frequency` broadcast against the lanes."""
        s = self.scaled(frequency)
        s = np.broadcast_to(s, np.broadcast_shapes(s.shape, (self.lanes,)))
        with np.errstate(divide="ignore", invalid="ignore"):
            return np.asarray(horner(numerator, s) / horner(denominator, s), dtype=complex)
