"""The chain behind one cell, as a hand calculation: symbols, numbers with units, result."""

from doubler.explain.chain import Explanation, Input, Step, explain
from doubler.explain.render import as_markdown, as_text

__all__ = ["Explanation", "Input", "Step", "as_markdown", "as_text", "explain"]
