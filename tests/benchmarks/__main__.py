"""Run every benchmark and print its ratios: ``python -m tests.benchmarks [MODULE ...]``."""

from __future__ import annotations

import importlib
import pkgutil
import sys
from pathlib import Path

from tests.benchmarks.ratio import Ratio


def modules(wanted: list[str]) -> list[str]:
    """Return the modules of this folder that measure something: those with a function `ratios`."""
    here = sorted(module.name for module in pkgutil.iter_modules([str(Path(__file__).parent)]))
    names = [
        name for name in here if name != "__main__" and not name.startswith("test_") and (not wanted or name in wanted)
    ]
    return [name for name in names if hasattr(importlib.import_module(f"tests.benchmarks.{name}"), "ratios")]


def main(wanted: list[str]) -> int:
    """Print all ratios; return 1 where a target is missed."""
    missed = 0
    for name in modules(wanted):
        print(f"{name}:", flush=True)
        found: list[Ratio] = importlib.import_module(f"tests.benchmarks.{name}").ratios()
        for ratio in found:
            missed += not ratio.met
            print(" ", ratio.line(), flush=True)
    return 1 if missed else 0


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
