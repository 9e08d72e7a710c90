"""The form of a calc sheet: one page wide, a title block, inputs, results in two columns that check each other.

A template declares its rows (`Given`, `Result`); this module lays them out, draws the look and puts in names and
validations. Formulas are written with the names of other rows in braces:

- `ours` (column C): ``{load}`` is the row's value cell with its unit cell (``C9:D9``), ``{load.v}`` the value alone;
- `native` (column E): ``{load}`` is an input by its defined name, a result by its cell in the native column, so that
  the native column is a chain of its own.
"""

from __future__ import annotations

import re
from dataclasses import dataclass

from openpyxl import Workbook
from openpyxl.formatting.rule import FormulaRule
from openpyxl.styles import Alignment, Border, Font, PatternFill, Side
from openpyxl.workbook.defined_name import DefinedName
from openpyxl.worksheet.datavalidation import DataValidation
from openpyxl.worksheet.properties import PageSetupProperties

PINE, SAND, SAGE, MIST, CLAY, INK, SLATE = "24413F", "F3E9D6", "DCE7DF", "F4F6F4", "EBC0A9", "1F2A2A", "4E6264"
FACE = "Arial"
WIDTHS = {"A": 9, "B": 34, "C": 14, "D": 9, "E": 14, "F": 9, "G": 11.5, "H": 37}
HEAD = ("Symbol", "Description", "Value", "Unit", "Native value", "Unit", "Difference [-]", "In words; source")
CAUTION = (
    "Caution: these checks aid licensed engineering judgement and local codes, and never replace them. Whoever signs "
    "answers for the loads, the allowables, the factors and the fitness of each formula for the part."
)


OURS = re.compile(r"(?:STRESS|SECTION|STIFFNESS|MARGIN|MODULUS)_[A-Z_0-9]+\(")


@dataclass(frozen=True)
class Limit:
    """What a validation admits, as the spreadsheet holds it, and in words."""

    kind: str
    words: str
    operator: str | None = None
    low: str | None = None
    high: str | None = None


POSITIVE = Limit("decimal", "a number above 0", "greaterThan", "0")
NOT_NEGATIVE = Limit("decimal", "a number that is not negative", "greaterThanOrEqual", "0")
AT_LEAST_ONE = Limit("decimal", "a factor of at least 1", "greaterThanOrEqual", "1")
NUMBER = Limit("decimal", "a number", "between", "-1000000000", "1000000000")
POISSON = Limit("decimal", "a number from -1 to 0.5", "between", "-1", "0.5")


def choice(*items: str) -> Limit:
    """Return the limit to a list of choices."""
    return Limit("list", "one of " + ", ".join(items), None, '"' + ",".join(items) + '"')


@dataclass(frozen=True)
class Given:
    """An input: a constant with a defined name."""

    name: str
    symbol: str
    words: str
    value: float | str
    unit: str
    limit: Limit | None
    source: str
    form: str = "General"


@dataclass(frozen=True)
class Result:
    """A result: a formula with a defined name, and the native formula that checks it."""

    name: str
    symbol: str
    words: str
    ours: str
    unit: str
    native: str | None
    source: str
    form: str = "0.000"
    margin: bool = False
    difference: str = "relative"


Row = Given | Result | str


class _Pair:
    """Stands for a row in the text of one of our formulas: its cells as a pair, or one of them alone."""

    def __init__(self, row: int) -> None:
        self.v = f"C{row}"
        self.row = row

    def __format__(self, spec: str) -> str:
        return f"C{self.row}:D{self.row}"


def _side(colour: str = "B9C6C1", style: str = "thin") -> Side:
    return Side(style=style, color=colour)


def _fill(colour: str) -> PatternFill:
    return PatternFill("solid", fgColor=colour)


def _font(size: float = 9.5, colour: str = INK, *, bold: bool = False, italic: bool = False) -> Font:
    return Font(name=FACE, size=size, color=colour, bold=bold, italic=italic)


class CalcSheet:
    """One calc sheet on which rows are laid from the top down."""

    def __init__(self, name: str, title: str, scenario: str, part: str, case: str) -> None:
        self.book = Workbook()
        self.sheet = self.book.active
        self.sheet.title = name
        self.rows: dict[str, int] = {}
        self.given: set[str] = set()
        self.row = 1
        for column, width in WIDTHS.items():
            self.sheet.column_dimensions[column].width = width
        self._head(title, scenario, part, case)

    def _put(
        self, place: str, value: object, font: Font, *, wrap: bool = False, side: str = "left", indent: int = 0
    ) -> None:
        cell = self.sheet[place]
        cell.value = value
        cell.font = font
        cell.alignment = Alignment(horizontal=side, vertical="center", wrap_text=wrap, indent=indent)

    def _head(self, title: str, scenario: str, part: str, case: str) -> None:
        sheet = self.sheet
        for column in WIDTHS:
            for row in (1, 2):
                sheet[f"{column}{row}"].fill = _fill(PINE)
        self._put("A1", title, _font(17, "FFFFFF", bold=True), indent=1)
        self._put("A2", scenario, _font(9.5, "DCE7DF"), indent=1)
        sheet.row_dimensions[1].height = 28
        sheet.row_dimensions[2].height = 17
        block = (
            ("A", "B", "Part", part, "E", "F", "H", "Author", ""),
            ("A", "B", "Case", case, "E", "F", "H", "Checker", ""),
        )
        for row, (label_at, value_at, label, value, other, start, end, words, blank) in enumerate(block, 3):
            self._put(f"{label_at}{row}", label, _font(8.5, SLATE))
            self._put(f"{value_at}{row}", value, _font(10, bold=True))
            self._put(f"{other}{row}", words, _font(8.5, SLATE))
            self._put(f"{start}{row}", blank or None, _font(10))
            sheet.merge_cells(f"{start}{row}:{'G' if end == 'H' else end}{row}")
            for column in ("B", "C", "F", "G", "H"):
                sheet[f"{column}{row}"].border = Border(bottom=_side())
            sheet.row_dimensions[row].height = 17
        self._put("H3", "Date:", _font(8.5, SLATE))
        self._put("H4", "Revision: A", _font(8.5, SLATE))
        self.book.defined_names["case"] = DefinedName("case", attr_text=f"'{sheet.title}'!$B$4")
        sheet["B4"].fill = _fill(SAND)
        self._put("A5", CAUTION, _font(8, SLATE, italic=True), wrap=True)
        sheet.merge_cells("A5:H5")
        sheet.row_dimensions[5].height = 26
        legend = (
            ("A6:B6", "sand field: an input, yours to fill in", SAND, False),
            ("C6:D6", "sage field: a doubler function", SAGE, False),
            ("E6:G6", "pale or slanted: native formulas", MIST, True),
            ("H6:H6", "clay: a difference, or a margin below 0", CLAY, False),
        )
        for area, words, colour, italic in legend:
            first = area.split(":")[0]
            self._put(first, words, _font(8, italic=italic), side="center", wrap=True)
            if first != area.split(":")[1]:
                sheet.merge_cells(area)
            sheet[first].fill = _fill(colour)
        sheet.row_dimensions[6].height = 16
        for column, words in zip(WIDTHS, HEAD, strict=True):
            side, indent = ("right" if column in "CEG" else "left"), (0 if column in "AB" else 1)
            self._put(f"{column}7", words, _font(8.5, SLATE, bold=True), side=side, indent=indent)
            sheet[f"{column}7"].border = Border(bottom=_side(PINE, "medium"))
        sheet.row_dimensions[7].height = 17
        sheet.freeze_panes = "A8"
        self.row = 8

    def section(self, words: str) -> None:
        """Begin a section with a band."""
        self._put(f"A{self.row}", words, _font(10, PINE, bold=True))
        for column in WIDTHS:
            self.sheet[f"{column}{self.row}"].border = Border(bottom=_side(PINE))
        self.sheet.row_dimensions[self.row].height = 21
        self.row += 1

    def lay(self, rows: list[Row]) -> None:
        """Lay rows below one another; a text begins a section."""
        for item in rows:
            if isinstance(item, str):
                self.section(item)
                continue
            self.rows[item.name] = self.row
            self._words(item)
            if isinstance(item, Given):
                self._given(item)
            else:
                self._result(item)
            where = f"'{self.sheet.title}'!$C${self.row}"
            self.book.defined_names[item.name] = DefinedName(item.name, attr_text=where)
            self.row += 1

    def _words(self, item: Given | Result) -> None:
        row = self.row
        self._put(f"A{row}", item.symbol, _font(9.5, italic=True))
        self._put(f"B{row}", item.words, _font(9.5))
        self._put(f"D{row}", item.unit, _font(9, SLATE), indent=1)
        self._put(f"H{row}", item.source, _font(8.5, SLATE), wrap=True, indent=1)
        long = len(item.source) > 55 or len(item.words) > 46
        self.sheet[f"B{row}"].alignment = Alignment(vertical="center", wrap_text=True)
        self.sheet.row_dimensions[row].height = 25 if long else 18
        for column in WIDTHS:
            self.sheet[f"{column}{row}"].border = Border(bottom=_side("DDE4E0", "hair"))

    def _given(self, item: Given) -> None:
        place = f"C{self.row}"
        self.given.add(item.name)
        self._put(place, item.value, _font(10), side="right", indent=1)
        self.sheet[place].number_format = item.form
        self.sheet[place].fill = _fill(SAND)
        self.sheet[place].border = Border(left=_side("B58B4C", "medium"), bottom=_side("D9C9A8"))
        if item.limit is None:
            return
        limit = item.limit
        rule = DataValidation(
            limit.kind, operator=limit.operator, formula1=limit.low, formula2=limit.high, allow_blank=False
        )
        rule.errorTitle, rule.error = "Not admitted here", f"{item.words}: give {limit.words}."
        rule.showErrorMessage = True
        rule.add(place)
        self.sheet.add_data_validation(rule)

    def _result(self, item: Result) -> None:
        row = self.row
        mine = OURS.search(item.ours) is not None
        text = item.ours.format_map({name: _Pair(number) for name, number in self.rows.items()})
        self._put(f"C{row}", text, _font(10, bold=item.margin, italic=not mine), side="right", indent=1)
        self.sheet[f"C{row}"].number_format = item.form
        self.sheet[f"C{row}"].fill = _fill(SAGE if mine else MIST)
        if item.native is None:
            return
        chain = {name: name if name in self.given else f"E{number}" for name, number in self.rows.items()}
        self._put(f"E{row}", item.native.format_map(chain), _font(10, SLATE, italic=True), side="right", indent=1)
        self.sheet[f"E{row}"].number_format = item.form
        self._put(f"F{row}", item.unit, _font(9, SLATE), indent=1)
        if item.difference == "none":
            return
        gap = (
            f"=ROUND(E{row}-C{row},12)"
            if item.difference == "absolute"
            else f"=IF(E{row}=C{row},0,ROUND(E{row}/C{row}-1,12))"
        )
        self._put(f"G{row}", gap, _font(9, SLATE), side="right", indent=1)
        self.sheet[f"G{row}"].number_format = "0.0E+00;-0.0E+00;0"

    def finish(self) -> None:
        """Put in what rests on the whole sheet: the colours by condition, and the page."""
        sheet, last = self.sheet, self.row - 1
        clay = {"fill": PatternFill("solid", bgColor=CLAY), "font": Font(color="6B2A12", bold=True)}
        sheet.conditional_formatting.add(
            f"G8:G{last}", FormulaRule(["IF(ISNUMBER(G8),ABS(G8)>1E-9,ISERROR(G8))"], **clay)
        )
        for name, row in self.rows.items():
            if name.startswith("ms_"):
                for column in "CE":
                    rule = FormulaRule([f"IF(ISNUMBER({column}{row}),{column}{row}<0,ISERROR({column}{row}))"], **clay)
                    sheet.conditional_formatting.add(f"{column}{row}", rule)
        sheet.sheet_view.showGridLines = False
        sheet.print_area = f"A1:H{last}"
        sheet.print_title_rows = "7:7"
        sheet.sheet_properties.pageSetUpPr = PageSetupProperties(fitToPage=True)
        sheet.page_setup.fitToWidth, sheet.page_setup.fitToHeight = 1, 0
        sheet.page_setup.orientation, sheet.page_setup.paperSize = "portrait", 9
        margins = sheet.page_margins
        margins.left = margins.right = 0.5
        margins.top, margins.bottom, margins.header, margins.footer = 0.5, 0.6, 0.25, 0.25
        sheet.print_options.horizontalCentered = True
        sheet.oddFooter.left.text = "&F"
        sheet.oddFooter.right.text = "page &P of &N"
