"""SUBTOTAL and AGGREGATE pass over other subtotals and hidden rows in their range: where there are any, say so.

The value rules know nothing of rows that are hidden or of the formulas behind the values; a sum that took a subtotal in
twice would be a plausible wrong number.
"""

from __future__ import annotations

import re
from typing import TYPE_CHECKING

from doubler.workbook.model import Address, Workbook

if TYPE_CHECKING:
    from doubler.workbook.geometry import Geometry
    from doubler.workbook.graph import Group

_CALL = re.compile(r"(?<![\w.])(?:_xlfn\.)?(?:SUBTOTAL|AGGREGATE)\(", re.IGNORECASE)


def refuse_nested_subtotals(workbook: Workbook, geometry: Geometry, groups: list[Group]) -> None:
    """Give a reason to each subtotal whose range holds another one, or a hidden row."""
    cells: list[set[Address]] = [
        {address for address, cell in sheet.cells.items() if cell.formula and _CALL.search(cell.formula)}
        for sheet in workbook.sheets
    ]
    if not any(cells):
        return
    for group in groups:
        run = group.run
        if group.program is None or (run.row, run.column) not in cells[run.sheet]:
            continue
        for slot in group.program.slots:
            for sheet, area in geometry.covered(slot, run):
                if any(address in area for address in cells[sheet]):
                    group.reason = "its subtotal passes over the other subtotals in its range, which is not evaluated"
                elif any(area.first_row <= row <= area.last_row for row in workbook.sheets[sheet].hidden_rows):
                    group.reason = "its subtotal passes over hidden rows, which is not evaluated"
        if group.reason:
            group.program = None
