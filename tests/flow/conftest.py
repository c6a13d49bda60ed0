"""Makes the modules of this folder importable under the importlib mode of pytest."""

import sys
from pathlib import Path

sys.path.insert(0, str(Path(__file__).parent))
