"""A copy of a checked workbook with the mends that are beyond doubt written in, marked, and its values recalculated."""

from __future__ import annotations

import os
import tempfile
from collections.abc import Iterator
from pathlib import Path
from typing import TYPE_CHECKING

from doubler.check.examination import CheckReport
from doubler.check.finding import Finding
from doubler.check.marking_comments import add_comments
from doubler.check.marking_styles import MarkingStyles
from doubler.check.mend import Mend, mend_of
from doubler.workbook.addresses import cell_name
from doubler.workbook.cell_xml import number_text
from doubler.workbook.evaluate import NotEvaluated, evaluate
from doubler.workbook.examined import Key, shown
from doubler.workbook.graph import build_graph
from doubler.workbook.model import Address, Cell, Scalar, Sheet, Workbook
from doubler.workbook.output import write_file
from doubler.workbook.package import Package
from doubler.workbook.package_edit import PackageEdit, changed_since, sibling
from doubler.workbook.reader import workbook_from
from doubler.workbook.writer import refuse_own_file, write_filled
from doubler.workbook.xml_guard import child, children

if TYPE_CHECKING:
    from lxml.etree import _Element


def mends(report: CheckReport) -> list[tuple[Finding, Mend]]:
    """Return the findings that have one mend only, worst first, one a cell."""
    found: dict[Key, tuple[Finding, Mend]] = {}
    for finding in report.findings:
        if finding.severity == "note":
            continue
        mend = mend_of(report.book, finding)
        if mend is not None and mend.written and not _filled_by_array(report.book.workbook, mend.key):
            found.setdefault(mend.key, (finding, mend))
    return list(found.values())


def _filled_by_array(workbook: Workbook, key: Key) -> bool:
    sheet = workbook.sheet(key[0])
    cell = None if sheet is None else sheet.cells.get(key[1])
    return cell is not None and cell.array_range is not None


def write_mended(report: CheckReport, target: Path) -> list[tuple[Finding, Mend]]:
    """Write the mended copy; the workbook that was checked stays as it is.

    Parameters
    ----------
    report : CheckReport
    target : Path
        The file to write.

    Returns
    -------
    list of (Finding, Mend)
        What was mended.

    Raises
    ------
    InputError
        The workbook was changed since it was checked, or the target is that workbook or can't be written.
    """
    refuse_own_file(target, report.path)
    package = Package(report.path)
    changed_since(package, report.sha256)
    done = mends(report)
    edit = PackageEdit(package)
    if done:
        styles = MarkingStyles(edit)
        for number, sheet in enumerate(report.book.workbook.sheets, start=1):
            mine = {mend.key[1]: (finding, mend) for finding, mend in done if mend.key[0] == sheet.name}
            if not mine:
                continue
            _mend_sheet(edit.root(sheet.part), sheet, {at: mend for at, (_, mend) in mine.items()}, styles)
            texts = {at: _comment(report, finding, mend) for at, (finding, mend) in mine.items()}
            add_comments(edit, sheet.part, texts, 60 + number)
    descriptor, name = tempfile.mkstemp(suffix=report.path.suffix, prefix=".mended_", dir=target.absolute().parent)
    os.close(descriptor)
    between = Path(name)
    try:
        write_file(between, edit.assemble())
        write_filled(between, target, {}, dict(_recalculated(between)))
    finally:
        between.unlink(missing_ok=True)
    return done


def _comment(report: CheckReport, finding: Finding, mend: Mend) -> str:
    cell = report.book.cell(mend.key)
    before = "" if cell is None else f"={cell.formula}" if cell.formula is not None else shown(cell.value)
    return f"Mended by doubler ({finding.kind}). Before: {before}\n{finding.message}"


def _mend_sheet(root: _Element, sheet: Sheet, wanted: dict[Address, Mend], styles: MarkingStyles) -> None:
    """Write the mends into a sheet's part; copies of a shared formula that is touched get formulas of their own."""
    shared = {sheet.cells[at].shared for at in wanted if at in sheet.cells} - {None}
    alone = {at: cell for at, cell in sheet.cells.items() if cell.shared in shared and at not in wanted}
    data = child(root, "sheetData")
    for row in children(data, "row") if data is not None else ():
        for element in children(row, "c"):
            address = _address(element)
            if address in wanted:
                _write(element, wanted[address])
                style = element.get("s") or "0"
                element.set("s", str(styles.marked(int(style) if style.isdigit() else 0, "note")))
            elif address in alone:
                _own_formula(element, alone[address])


def _address(element: _Element) -> Address | None:
    from doubler.workbook.addresses import parse_cell

    reference = element.get("r")
    return parse_cell(reference) if reference else None


def _own_formula(element: _Element, cell: Cell) -> None:
    formula = child(element, "f")
    if formula is not None:
        for name in ("t", "si", "ref"):
            formula.attrib.pop(name, None)
        formula.text = cell.formula


def _write(element: _Element, mend: Mend) -> None:
    for part in list(element):
        if str(part.tag).rpartition("}")[2] in ("f", "v", "is"):
            element.remove(part)
    element.attrib.pop("t", None)
    if mend.formula is not None:
        formula = sibling(element, "f")
        formula.text = mend.formula
        element.insert(0, formula)
    elif mend.number is not None:
        value = sibling(element, "v")
        value.text = number_text(mend.number)
        element.insert(0, value)


def _recalculated(path: Path) -> Iterator[tuple[tuple[str, int, int], Scalar]]:
    """Yield what each formula of a workbook gives; one that is not known here keeps the value that it stores."""
    book = workbook_from(Package(path))
    values = evaluate(build_graph(book))
    for sheet, address, cell in book.formulas():
        value = values.value(sheet.name, address)
        if not isinstance(value, NotEvaluated):
            yield (sheet.name, *address), 0.0 if value is None else value
        elif cell.value is not None:
            yield (sheet.name, *address), cell.value


def mended_as_text(done: list[tuple[Finding, Mend]]) -> list[str]:
    """Return one line for each mend."""
    return [
        f"{finding.sheet}!{cell_name(*mend.key[1])}: "
        + (f"={mend.formula}" if mend.formula is not None else shown(mend.number))
        for finding, mend in done
    ]
