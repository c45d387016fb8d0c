"""Hypothesis profiles, and a unit system that no test leaves changed."""

import os
from collections.abc import Iterator

import pytest
from hypothesis import settings

from wellindex import set_unit_system

settings.register_profile("ci", derandomize=True, max_examples=60, deadline=None)
settings.register_profile("thorough", max_examples=300, deadline=None)
settings.load_profile(os.environ.get("WELLINDEX_HYPOTHESIS", "ci"))


@pytest.fixture(autouse=True)
def _metric_before_and_after() -> Iterator[None]:
    set_unit_system("metric")
    yield
    set_unit_system("metric")
