"""Settings for every test."""

from __future__ import annotations

from hypothesis import HealthCheck, settings

# No deadline: the first call of a kernel compiles it.
settings.register_profile("fzconnect", deadline=None, suppress_health_check=[HealthCheck.too_slow])
settings.load_profile("fzconnect")
