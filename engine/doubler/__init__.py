"""doubler: unit-aware stress worksheet functions, filled calc workbooks, and their independent check."""

__version__ = "0.1.0"
