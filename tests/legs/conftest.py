"""The tests of legs and of paths share one helper, which stands beside the tests of paths."""

import sys
from pathlib import Path

sys.path.append(str(Path(__file__).parents[1] / "path"))
