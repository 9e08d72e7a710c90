"""Reading a workbook: from its package to the model, each sheet's XML once."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

from doubler.errors import InputError
from doubler.workbook.addresses import parse_area
from doubler.workbook.collector import collector_held
from doubler.workbook.model import DefinedName, Sheet, Table, Workbook
from doubler.workbook.notes_part import read_comments
from doubler.workbook.package import Package
from doubler.workbook.sheet_part import SheetContext, filtered_areas, read_sheet
from doubler.workbook.strings_part import read_shared_texts, unescape
from doubler.workbook.styles_part import read_number_formats
from doubler.workbook.xml_guard import child, children, is_true, local_name, relationship_id

if TYPE_CHECKING:
    from lxml.etree import _Element


def read_workbook(path: Path | str) -> Workbook:
    """Read a workbook of the kinds ``.xlsx`` and ``.xlsm``.

    Parameters
    ----------
    path : Path or str
        The file.

    Returns
    -------
    Workbook
        Its cells with stored values and formulas, names, tables, and what else evaluation and check need.

    Raises
    ------
    InputError
        Where the file can't be read, is of another kind, is damaged, encrypted, or exceeds the limits of
        `doubler.workbook.package`.
    """
    return workbook_from(Package(path))


def workbook_from(package: Package) -> Workbook:
    """Read the workbook of a package that is open already.

    Parameters
    ----------
    package : Package
        The opened package.
    """
    part = package.workbook_part()
    root = package.root(part)
    if local_name(root) != "workbook":
        raise InputError(
            f"{package.path} is not a workbook: its main part {part} holds <{local_name(root)}>; give "
            "an .xlsx or .xlsm file"
        )
    properties, calculation = child(root, "workbookPr"), child(root, "calcPr")
    date1904 = properties is not None and is_true(properties.get("date1904"))
    listed = sheet_listing(package, part, root)
    book = Workbook(
        path=package.path,
        sha256=package.sha256,
        sheets=[sheet for sheet in listed if sheet is not None],
        number_formats=read_number_formats(package, part),
        date1904=date1904,
        calculated_on_load=calculation is not None and is_true(calculation.get("fullCalcOnLoad")),
        iterative=calculation is not None and is_true(calculation.get("iterate")),
        external_links=_external_links(package, part, root),
    )
    book.names = _names(root, [child.get("name", "") for child in _sheet_elements(root)])
    context = SheetContext(package, read_shared_texts(package, part), _dynamic_metadata(package, part), date1904)
    with collector_held():
        for sheet in book.sheets:
            read_sheet(sheet, context)
            sheet.comments = read_comments(package, sheet.part)
            book.tables += _tables(package, sheet)
    return book


def sheet_listing(package: Package, part: str, root: _Element) -> list[Sheet | None]:
    """Return the sheets that a workbook part lists, still empty; None for a sheet that holds no cells.

    Parameters
    ----------
    package : Package
        The opened package.
    part : str
        Name of the workbook part.
    root : Element
        Its root.

    Raises
    ------
    InputError
        Where the part of a listed worksheet is missing.
    """
    relationships = package.relationships(part)
    found: list[Sheet | None] = []
    for element in _sheet_elements(root):
        name = element.get("name", "")
        relationship = relationships.get(relationship_id(element) or "")
        if relationship is None:
            raise InputError(
                f"{package.path} is damaged: the part of its sheet '{name}' is not named; save it "
                "again in a spreadsheet program"
            )
        if relationship.kind != "worksheet":
            found.append(None)
            continue
        if not package.has(relationship.target):
            raise InputError(
                f"{package.path} is damaged: the part {relationship.target} of its sheet '{name}' is "
                "missing; save it again in a spreadsheet program"
            )
        state = element.get("state", "visible")
        found.append(Sheet(name=name, part=relationship.target, visibility=state))
    if not any(found):
        raise InputError(f"{package.path} holds no worksheet; give a workbook with at least one")
    return found


def _sheet_elements(root: _Element) -> list[_Element]:
    sheets = child(root, "sheets")
    return [] if sheets is None else children(sheets, "sheet")


def _names(root: _Element, sheets: list[str]) -> list[DefinedName]:
    names = child(root, "definedNames")
    found = []
    for element in [] if names is None else children(names, "definedName"):
        scope = element.get("localSheetId", "")
        local = sheets[int(scope)] if scope.isdigit() and int(scope) < len(sheets) else None
        text = unescape(element.text or "").strip().removeprefix("=")
        found.append(DefinedName(element.get("name", ""), text, local, is_true(element.get("hidden"))))
    return found


def _external_links(package: Package, part: str, root: _Element) -> list[str]:
    """Return the files to which formulas refer as [1], [2] …, in that order."""
    references = child(root, "externalReferences")
    found = []
    for element in [] if references is None else children(references, "externalReference"):
        relationship = package.relationships(part).get(relationship_id(element) or "")
        inner = package.relationships(relationship.target) if relationship is not None else {}
        found.append(next((link.target for link in inner.values() if link.external), ""))
    return found


def _dynamic_metadata(package: Package, part: str) -> frozenset[str] | None:
    """Return which values of a cell's ``cm`` mark a dynamic array; None where the file has no such table."""
    metadata = next(iter(package.related(part, "sheetMetadata")), None)
    if metadata is None or not package.has(metadata):
        return None
    root = package.root(metadata)
    types = child(root, "metadataTypes")
    kinds = [] if types is None else [kind.get("name", "") for kind in children(types, "metadataType")]
    flags: list[bool] = []
    for future in children(root, "futureMetadata"):
        if future.get("name") == "XLDAPR":
            for block in children(future, "bk"):
                marks = [inner for inner in block.iter() if local_name(inner) == "dynamicArrayProperties"]
                flags.append(any(is_true(mark.get("fDynamic")) for mark in marks))
    dynamic = set()
    cells = child(root, "cellMetadata")
    for number, block in enumerate([] if cells is None else children(cells, "bk"), start=1):
        for record in children(block, "rc"):
            kind, value = record.get("t", ""), record.get("v", "")
            named = kind.isdigit() and 1 <= int(kind) <= len(kinds) and kinds[int(kind) - 1] == "XLDAPR"
            if named and value.isdigit() and int(value) < len(flags) and flags[int(value)]:
                dynamic.add(str(number))
    return frozenset(dynamic)


def _tables(package: Package, sheet: Sheet) -> list[Table]:
    found = []
    for part in package.related(sheet.part, "table"):
        if not package.has(part):
            continue
        root = package.root(part)
        columns = child(root, "tableColumns")
        names = (
            [] if columns is None else [unescape(column.get("name", "")) for column in children(columns, "tableColumn")]
        )
        buttons = child(root, "autoFilter")
        sheet.filtered += [] if buttons is None else filtered_areas(buttons)
        header, total = root.get("headerRowCount", "1"), root.get("totalsRowCount", "0")
        try:
            area = parse_area(root.get("ref", ""))
        except InputError as error:
            raise InputError(f"{package.path}, part {part}: {error}; the workbook is damaged, save it again") from None
        found.append(
            Table(
                name=unescape(root.get("displayName") or root.get("name", "")),
                sheet=sheet.name,
                area=area,
                columns=tuple(names),
                header_rows=int(header) if header.isdigit() else 1,
                total_rows=int(total) if total.isdigit() else 0,
            )
        )
    return found
