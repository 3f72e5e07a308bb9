"""Property tests try the same examples on every run; HYPOTHESIS_PROFILE=explore tries new ones."""

from __future__ import annotations

import os

from hypothesis import HealthCheck, settings

# the first use of text on a machine builds a table of characters for a second: no reason to fail
QUIET = {"deadline": None, "suppress_health_check": [HealthCheck.too_slow]}
settings.register_profile("same", derandomize=True, **QUIET)
settings.register_profile("explore", derandomize=False, **QUIET)
settings.load_profile(os.environ.get("HYPOTHESIS_PROFILE", "same"))
