"""Settings of the property tests: the same cases in every run, and no clock in the verdict.

``pytest --hypothesis-profile=default`` looks for new cases instead.
"""

from __future__ import annotations

import pytest
from hypothesis import HealthCheck, settings

settings.register_profile(
    "repeatable",
    derandomize=True,
    deadline=None,
    database=None,
    print_blob=False,
    # A case holds a network and a few linear problems, which the check takes for a slow strategy.
    suppress_health_check=[HealthCheck.too_slow],
)


def pytest_configure(config: pytest.Config) -> None:
    settings.load_profile(config.getoption("--hypothesis-profile", None) or "repeatable")
