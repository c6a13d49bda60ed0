"""Makes the cases of this folder importable by its tests, and the small log once for all of them."""

import sys
from pathlib import Path

import pytest

sys.path.insert(0, str(Path(__file__).parent))

from report_cases import small_log

from logkit.report.wells import Well, make_well


@pytest.fixture(scope="session")
def small() -> Well:
    """The small log with its results."""
    return make_well(small_log(), None, None)
