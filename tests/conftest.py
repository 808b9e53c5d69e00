"""What holds for all tests: Qt without a screen, repeatable examples, and no warning that goes unnoticed."""

from __future__ import annotations

import logging
import os
from collections.abc import Iterator

import pytest
from hypothesis import HealthCheck, settings

# Before Qt loads: no screen, and raster fills stay on the painting thread (several times faster on few cores).
os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")
os.environ.setdefault("QT_NO_GUI_THREADPOOL", "1")

# The usual profile gives the same examples every time; HYPOTHESIS_PROFILE=search looks for new ones.
_ANY_PACE = {"deadline": None, "suppress_health_check": [HealthCheck.too_slow]}
settings.register_profile("repeat", derandomize=True, database=None, max_examples=100, **_ANY_PACE)
settings.register_profile("search", max_examples=2_000, print_blob=True, **_ANY_PACE)
settings.load_profile(os.environ.get("HYPOTHESIS_PROFILE", "repeat"))


@pytest.fixture(autouse=True)
def no_unexpected_log_record(caplog: pytest.LogCaptureFixture) -> Iterator[None]:
    """Fail a test that logged a warning or worse; one that means to checks it and calls `caplog.clear()`."""
    yield
    records = [*caplog.get_records("setup"), *caplog.get_records("call")]
    unexpected = [record.getMessage() for record in records if record.levelno >= logging.WARNING]
    assert not unexpected, f"logged without being expected: {unexpected}"
