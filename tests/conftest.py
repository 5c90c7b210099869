"""Fixtures and hypothesis profiles for all tests."""

from __future__ import annotations

import os

from hypothesis import HealthCheck, settings

settings.register_profile("quick", max_examples=60, deadline=None, suppress_health_check=[HealthCheck.too_slow])
settings.register_profile("thorough", max_examples=2000, deadline=None)
settings.load_profile(os.environ.get("HYPOTHESIS_PROFILE", "quick"))
