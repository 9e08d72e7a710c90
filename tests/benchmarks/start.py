"""How soon the command line answers."""

from __future__ import annotations

import subprocess
import sys

from tests.benchmarks.ratio import Ratio, side_by_side

HELP = [sys.executable, "-c", "import sys; from doubler.cli import main; sys.exit(main(['--help']))"]


def ratios() -> list[Ratio]:
    """Measure `doubler --help` against an interpreter that does nothing."""

    def nothing() -> object:
        return subprocess.run([sys.executable, "-c", "pass"], check=True, capture_output=True)

    def help_text() -> object:
        return subprocess.run(HELP, check=True, capture_output=True)

    plain, ours = side_by_side(nothing, help_text, rounds=20)
    return [Ratio("doubler --help / python -c pass", ours / plain, 4.0)]
