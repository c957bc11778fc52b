"""Lets the property files import their helpers under ``--import-mode=importlib``, which leaves the search path alone."""

import sys
from pathlib import Path

if (here := str(Path(__file__).parent)) not in sys.path:
    sys.path.insert(0, here)
