"""Helpers of this folder can be imported by its tests; hypothesis without a clock, since machines are shared."""

from __future__ import annotations

import sys
from pathlib import Path

from hypothesis import settings

sys.path.insert(0, str(Path(__file__).parent))
settings.register_profile("steady", deadline=None, derandomize=True)
settings.load_profile("steady")
