"""Makes the helpers beside the tests importable, and keeps hypothesis the same from run to run.

Compiled modules are kept wherever the tests run, as every other start of the command finds them: else each of the
many commands that tests start would compile the whole package anew.
"""

from __future__ import annotations

import os
import sys
from pathlib import Path

from hypothesis import HealthCheck, settings

sys.dont_write_bytecode = False
os.environ.pop("PYTHONDONTWRITEBYTECODE", None)
sys.path.insert(0, str(Path(__file__).parent))
settings.register_profile("steady", deadline=None, derandomize=True, suppress_health_check=[HealthCheck.too_slow])
settings.load_profile("steady")
