"""Where a falling function of a current passes zero, lane by lane."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from opto_ckt.limits import Lanes

STEPS = 60  #: at the most; ten are common
CLOSE = 1e-13  #: width of the interval over that at the start, at which a root counts as found


def falling_root(function: Callable[[Lanes], Lanes], low: Lanes, high: Lanes) -> Lanes:
    """Root of a function that falls from ``low`` to ``high``; an end where it does not pass zero between them.

    T. R. Chandrupatla's method (Adv. Eng. Software 28, 1997; from memory): inverse parabolas where they can be
    trusted, halving elsewhere.

    >>> print(f"{float(falling_root(lambda x: 2.0 - x**2, np.array(0.0), np.array(10.0))):.12f}")
    1.414213562373
    """
    near, far, close = high, low, CLOSE * np.maximum(high - low, 1e-300)
    at_near, at_far = function(near), function(far)
    share = np.full(np.shape(near), 0.5)
    best = near
    for _ in range(STEPS):
        tried = near + share * (far - near)
        found = function(tried)
        same = (found > 0) == (at_near > 0)
        last, at_last = np.where(same, near, far), np.where(same, at_near, at_far)
        far, at_far = np.where(same, far, near), np.where(same, at_far, at_near)
        near, at_near = tried, found
        best = np.where(np.abs(at_near) < np.abs(at_far), near, far)
        width = np.abs(far - last)
        if np.all((np.abs(far - near) <= close) | (at_near == 0)):
            break
        with np.errstate(divide="ignore", invalid="ignore"):
            place, height = (near - far) / (last - far), (at_near - at_far) / (at_last - at_far)
            parabola = at_near / (at_far - at_near) * at_last / (at_far - at_last) + (last - near) / (
                far - near
            ) * at_near / (at_last - at_near) * at_far / (at_last - at_far)
            least = np.minimum(close / (2 * width), 0.5)
        smooth = (height**2 < place) & ((1 - height) ** 2 < 1 - place) & np.isfinite(parabola)
        share = np.where(smooth, np.clip(parabola, least, 1 - least), 0.5)
    return np.asarray(best)
