"""Workbooks written part by part, so that a test can put anything where it belongs or where it does not."""

from __future__ import annotations

import zipfile
from pathlib import Path

MAIN = "http://schemas.openxmlformats.org/spreadsheetml/2006/main"
RELATIONS = "http://schemas.openxmlformats.org/officeDocument/2006/relationships"
PACKAGE = "http://schemas.openxmlformats.org/package/2006"
TYPES = "application/vnd.openxmlformats-officedocument.spreadsheetml"
HEAD = '<?xml version="1.0" encoding="UTF-8" standalone="yes"?>\n'


def sheet_xml(rows: str, after: str = "", main: str = MAIN) -> str:
    """Return a worksheet part around some rows."""
    return f'{HEAD}<worksheet xmlns="{main}"><sheetData>{rows}</sheetData>{after}</worksheet>'


def parts_of(sheet: str, main: str = MAIN, relations: str = RELATIONS) -> dict[str, str]:
    """Return the parts of the smallest workbook around a worksheet part."""
    return {
        "[Content_Types].xml": (
            f'{HEAD}<Types xmlns="{PACKAGE}/content-types"><Default Extension="xml" ContentType="application/xml"/>'
            f'<Default Extension="rels" ContentType="application/vnd.openxmlformats-package.relationships+xml"/>'
            f'<Override PartName="/xl/workbook.xml" ContentType="{TYPES}.sheet.main+xml"/>'
            f'<Override PartName="/xl/worksheets/sheet1.xml" ContentType="{TYPES}.worksheet+xml"/></Types>'
        ),
        "_rels/.rels": (
            f'{HEAD}<Relationships xmlns="{PACKAGE}/relationships"><Relationship Id="r1" '
            f'Type="{relations}/officeDocument" Target="xl/workbook.xml"/></Relationships>'
        ),
        "xl/workbook.xml": (
            f'{HEAD}<workbook xmlns="{main}" xmlns:r="{relations}"><sheets><sheet name="S" sheetId="1" r:id="r1"/>'
            "</sheets></workbook>"
        ),
        "xl/_rels/workbook.xml.rels": (
            f'{HEAD}<Relationships xmlns="{PACKAGE}/relationships"><Relationship Id="r1" Type="{relations}/worksheet" '
            f'Target="worksheets/sheet1.xml"/><Relationship Id="r2" Type="{relations}/sharedStrings" '
            'Target="sharedStrings.xml"/></Relationships>'
        ),
        "xl/sharedStrings.xml": f'{HEAD}<sst xmlns="{main}"><si><t>shared</t></si></sst>',
        "xl/worksheets/sheet1.xml": sheet,
    }


def write_parts(path: Path, parts: dict[str, str | bytes] | dict[str, str]) -> Path:
    """Write parts into a package."""
    with zipfile.ZipFile(path, "w", zipfile.ZIP_DEFLATED) as package:
        for name, content in parts.items():
            package.writestr(name, content)
    return path


def raw_book(path: Path, sheet: str) -> Path:
    """Write the smallest workbook around a worksheet part."""
    return write_parts(path, parts_of(sheet))
