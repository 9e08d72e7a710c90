"""Build the shipped calc templates: their form with openpyxl, their stored values by doubler's own evaluation.

Run it from anywhere: ``python workbook_templates/build.py``. Each run gives the same bytes.
"""

from __future__ import annotations

import sys
import zipfile
from io import BytesIO
from pathlib import Path

from openpyxl import Workbook

import constants
import demo_cases
import demo_colleague
import shaft
import strap
from doubler import mechanics
from doubler.errors import ErrorValue
from doubler.workbook.evaluate import NotEvaluated, evaluate
from doubler.workbook.graph import build_graph
from doubler.workbook.output import write_file
from doubler.workbook.reader import read_workbook
from doubler.workbook.writer import write_filled

HERE = Path(__file__).parent
STAMP = (2024, 1, 1, 0, 0, 0)
TEMPLATES = {
    "tension_strap.xlsx": strap.build,
    "shaft.xlsx": shaft.build,
    "elastic_constants.xlsx": constants.build,
}


def save_fixed(book: Workbook, target: Path) -> None:
    """Save a workbook with fixed dates, so that the same content gives the same bytes."""
    from datetime import datetime

    from openpyxl.packaging.core import DocumentProperties

    when = datetime(*STAMP)
    book.properties = DocumentProperties(creator="doubler", created=when, modified=when)
    raw = BytesIO()
    book.save(raw)
    fixed = BytesIO()
    with zipfile.ZipFile(raw) as source, zipfile.ZipFile(fixed, "w", zipfile.ZIP_DEFLATED) as package:
        for name in source.namelist():
            data = source.read(name)
            if name == "docProps/core.xml":
                data = _with_fixed_dates(data)
            package.writestr(zipfile.ZipInfo(name, STAMP), data, zipfile.ZIP_DEFLATED)
    write_file(target, [fixed.getvalue()])


def _with_fixed_dates(data: bytes) -> bytes:
    import re

    return re.sub(rb"\d{4}-\d\d-\d\dT\d\d:\d\d:\d\dZ", b"2024-01-01T00:00:00Z", data)


def store_values(raw: Path, target: Path, *, keep: dict[tuple[str, int, int], object] | None = None) -> list[str]:
    """Evaluate a workbook and write it with its stored values; return what could not be evaluated."""
    mechanics.load()
    workbook = read_workbook(raw)
    values = evaluate(build_graph(workbook))
    stored: dict[tuple[str, int, int], object] = {}
    missing = []
    for sheet, address, _ in workbook.formulas():
        value = values.value(sheet.name, address)
        if isinstance(value, NotEvaluated):
            missing.append(f"{sheet.name} {address}: {value}")
        else:
            stored[sheet.name, *address] = value
    stored.update(keep or {})
    write_filled(raw, target, {}, stored)
    return missing


def build(folder: Path) -> None:
    """Build all templates and the demo's data into a folder."""
    (folder / "demo").mkdir(exist_ok=True)
    demo_cases.build(folder / "demo")
    _colleague(folder / "demo")
    for name, make in TEMPLATES.items():
        raw = folder / f".raw-{name}"
        save_fixed(make().book, raw)
        try:
            missing = store_values(raw, folder / name)
        finally:
            raw.unlink()
        if missing:
            raise SystemExit(f"{name}: not evaluated:\n" + "\n".join(missing))
        errors = [
            f"{sheet.name} {address}: {cell.value}"
            for sheet, address, cell in read_workbook(folder / name).formulas()
            if isinstance(cell.value, ErrorValue)
        ]
        if errors:
            raise SystemExit(f"{name}: shipped with error values:\n" + "\n".join(errors))


def _colleague(folder: Path) -> None:
    """Build the colleague's workbook, one stored value of it stale on purpose, and the list of its faults."""
    raw, target = folder / ".raw-colleague.xlsx", folder / demo_colleague.NAME
    save_fixed(demo_colleague.build(), raw)
    sheet, row, column = demo_colleague.STALE_AT
    try:
        store_values(raw, target)
        right = read_workbook(target).sheet(sheet).cells[row, column].value
        missing = store_values(raw, target, keep={demo_colleague.STALE_AT: demo_colleague.STALE_SHARE * right})
    finally:
        raw.unlink()
    if missing:
        raise SystemExit(f"{target.name}: not evaluated:\n" + "\n".join(missing))
    write_file(folder / "colleague_faults.yaml", [demo_colleague.faults_text().encode("utf-8")])


if __name__ == "__main__":
    build(Path(sys.argv[1]) if len(sys.argv) > 1 else HERE)
