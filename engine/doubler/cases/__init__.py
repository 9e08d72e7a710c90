"""Tables of load cases: read with the units in their headings, bound to the inputs of a template."""

from doubler.cases.binding import BoundCases, CaseBatch, bind_cases
from doubler.cases.table import CaseTable, open_cases

__all__ = ["BoundCases", "CaseBatch", "CaseTable", "bind_cases", "open_cases"]
