"""Ten workbooks that are no stress calculations: whatever a check says of them as a fault would be a false alarm."""

from __future__ import annotations

import datetime
from collections.abc import Callable
from pathlib import Path

import openpyxl
from openpyxl.styles import PatternFill
from openpyxl.utils import get_column_letter as letters
from openpyxl.worksheet.datavalidation import DataValidation
from openpyxl.worksheet.table import Table

MONTHS = ("Jan", "Feb", "Mar", "Apr", "May", "Jun", "Jul", "Aug", "Sep", "Oct", "Nov", "Dec")
DAY = datetime.date(2031, 3, 3)

Book = openpyxl.Workbook


def budget(book: Book) -> None:
    """Income and costs by month, sums across and down, a share of each, a margin that is none of safety."""
    page = book.active
    page.title = "Budget"
    page.append(["Household budget 2031", None, None])
    page.append([])
    page.append(["Item", *MONTHS, "Total", "Share"])
    for row, (name, amount) in enumerate(
        [("Rent", 950.0), ("Food", 420.0), ("Energy (kWh)", 310.0), ("Fuel", 120.0), ("Insurance", 88.5)], start=4
    ):
        page.append([name, *(amount + 3 * n for n in range(12)), f"=SUM(B{row}:M{row})", f"=N{row}/N$9"])
    page.append(["Total costs", *(f"=SUM({letters(c)}4:{letters(c)}8)" for c in range(2, 15)), "=SUM(O4:O8)"])
    page.append(["Income", *(2600.0 for _ in MONTHS), "=SUM(B10:M10)"])
    page.append(["Balance", *(f"={letters(c)}10-{letters(c)}9" for c in range(2, 15))])
    page.append(["Cumulative", "=B11", *(f"={letters(c - 1)}12+{letters(c)}11" for c in range(3, 14))])
    page.append(["Margin", *(f"={letters(c)}11/{letters(c)}10" for c in range(2, 15))])
    for row in page["O4:O9"]:
        row[0].number_format = "0.0%"
    for row in page["B4:N12"]:
        for cell in row:
            cell.number_format = '#,##0.00 "€"'


def timetable(book: Book) -> None:
    """Departure times and running minutes; times are fractions of a day."""
    page = book.active
    page.title = "Line 4"
    page.append(["Timetable line 4, weekdays"])
    page.append(["Stop", "min", "Run 1", "Run 2", "Run 3", "Run 4"])
    for n, (name, minutes) in enumerate([("Market", 0), ("School", 4), ("Bridge", 3), ("Mill", 6), ("Station", 5)]):
        row = n + 3
        first = [datetime.time(6, 5), datetime.time(6, 35), datetime.time(7, 5), datetime.time(7, 35)]
        page.append([name, minutes, *(first if n == 0 else (f"={c}{row - 1}+$B{row}/1440" for c in "CDEF"))])
        for cell in page[row][2:]:
            cell.number_format = "hh:mm"
    page.append(["Running time", "=SUM(B3:B7)", *(f"=({c}7-{c}3)*1440" for c in "CDEF")])
    page.append(["Stops served", None, *(f"=COUNT({c}3:{c}7)" for c in "CDEF")])


def pivot_report(book: Book) -> None:
    """Rows of sales and a report over them by region and quarter, by SUMIFS and with subtotals."""
    data = book.active
    data.title = "Data"
    data.append(["Date", "Region", "Product", "Units", "Price", "Revenue"])
    regions, products = ("North", "South", "East", "West"), ("A-100", "B-200", "C-300")
    for n in range(120):
        data.append([DAY + datetime.timedelta(3 * n), regions[n % 4], products[n % 3], float(1 + n % 9),
                     19.9 + n % 5, f"=D{n + 2}*E{n + 2}"])  # fmt: skip
    report = book.create_sheet("Report")
    report.append(["Revenue by region and product"])
    report.append(["Row Labels", *products, "Grand Total"])
    for row, region in enumerate(regions, start=3):
        cells = [f"=SUMIFS(Data!$F$2:$F$121,Data!$B$2:$B$121,$A{row},Data!$C$2:$C$121,{c}$2)" for c in "BCD"]
        report.append([region, *cells, f"=SUM(B{row}:D{row})"])
    report.append(["Grand Total", *(f"=SUM({c}3:{c}6)" for c in "BCDE")])
    report.append([])
    report.append(["Average units", "=AVERAGE(Data!D2:D121)"])
    report.append(["Best region", "=INDEX(A3:A6,MATCH(MAX(E3:E6),E3:E6,0))"])
    report.append(["Rows", "=COUNTA(Data!B2:B121)"])
    report.append(["Check", '=IF(ABS(E7-SUM(Data!F2:F121))<0.01,"OK","differs")'])


def form(book: Book) -> None:
    """A form to be filled in: most cells are empty, formulas answer with an empty text."""
    page = book.active
    page.title = "Travel claim"
    page["A1"] = "Travel expense claim"
    page.merge_cells("A1:F1")
    for row, name in enumerate(("Name", "Department", "Purpose", "From", "To"), start=3):
        page.cell(row, 1, name)
        page.merge_cells(start_row=row, start_column=2, end_row=row, end_column=4)
    page["A9"], page["B9"], page["C9"], page["D9"], page["E9"] = "Date", "Description", "km", "Rate", "Amount"
    for row in range(10, 22):
        page.cell(row, 4, 0.3)
        page.cell(row, 5, f'=IF(C{row}="","",C{row}*D{row})')
    page["A22"], page["E22"] = "Total", "=SUM(E10:E21)"
    page["A23"], page["E23"] = "Advance received", None
    page["A24"], page["E24"] = "To be paid", "=E22-E23"
    page["A26"], page["B26"] = "Approved", '=IF(B3="","not yet filled in","to be approved for "&B3)'
    choice = DataValidation("list", formula1='"Sales,Works,Office"', allow_blank=True)
    page.add_data_validation(choice)
    choice.add("B4")


def gantt(book: Book) -> None:
    """Tasks with starts and lengths in days; a grid of ones and blanks by formulas."""
    page = book.active
    page.title = "Plan"
    page["A1"], page["D1"] = "Project start", DAY
    page.append([])
    page.append(["Task", "Days", "After", "Start", "End", *range(1, 31)])
    tasks = [("Survey", 4), ("Design", 8), ("Order", 3), ("Build", 10), ("Test", 5)]
    for n, (name, days) in enumerate(tasks):
        row = n + 4
        start = "=$D$1" if n == 0 else f"=E{row - 1}+1"
        page.append([name, days, None if n == 0 else tasks[n - 1][0], start, f"=D{row}+B{row}-1",
                     *(f'=IF(AND($D$1+{letters(c)}$3-1>=$D{row},$D$1+{letters(c)}$3-1<=$E{row}),1,"")'
                       for c in range(6, 36))])  # fmt: skip
        for cell in page[row][3:5]:
            cell.number_format = "yyyy-mm-dd"
    page.append(["Length of the project", "=E8-D4+1"])
    page.append(["Busy", None, None, None, None, *(f"=SUM({letters(c)}4:{letters(c)}8)" for c in range(6, 36))])


def inventory(book: Book) -> None:
    """Articles with sizes in their names, stock, reorder levels and values; a lookup at the side."""
    page = book.active
    page.title = "Stock"
    page.append(["Article", "Description", "On hand", "Unit", "Minimum", "Unit price", "Value", "Order?"])
    names = ["Bolt M8x40", "Nut M8", "Washer 8 mm", "Sheet 2 mm", "Angle 40x40x4", "Paint, 5 l", "Tape 50 m", "Glue"]
    for n, name in enumerate(names):
        row = n + 2
        page.append([f"P{1000 + n}", name, float(7 * n % 40), ("pcs", "pcs", "pcs", "kg", "m", "l", "m", "pcs")[n],
                     10.0 + n, 0.35 * (n + 1), f"=C{row}*F{row}", f'=IF(C{row}<E{row},"order","")'])  # fmt: skip
    page.append([None, "Total", None, None, None, None, "=SUM(G2:G9)", '=COUNTIF(H2:H9,"order")'])
    page["J1"], page["J2"] = "Article", "P1003"
    page["K1"], page["K2"] = "On hand", "=VLOOKUP(J2,A2:H9,3,FALSE)"
    page["L1"], page["L2"] = "Description", '=IFERROR(VLOOKUP(J2,A2:H9,2,FALSE),"unknown")'
    page.add_table(Table(displayName="stock", ref="A1:H9"))


def survey(book: Book) -> None:
    """Answers from 1 to 5 with gaps where none was given; means, shares and a cross table."""
    page = book.active
    page.title = "Answers"
    page.append(["ID", "Age", "Group", *(f"Q{n}" for n in range(1, 7)), "Mean"])
    for n in range(40):
        answers: list[float | None] = [float(1 + (3 * n + 5 * q) % 5) for q in range(6)]
        if n % 7 == 3:
            answers[n % 6] = None
        page.append([n + 1, 20.0 + n, ("A", "B")[n % 2], *answers, f"=AVERAGE(D{n + 2}:I{n + 2})"])
    result = book.create_sheet("Results")
    result.append(["Question", "n", "Mean", "Std. dev.", "Share of 4 and 5", "Group A", "Group B"])
    for n, c in enumerate("DEFGHI", start=2):
        over = f"Answers!{c}$2:{c}$41"
        result.append([f"Q{n - 1}", f"=COUNT({over})", f"=AVERAGE({over})", f"=STDEV({over})",
                       f'=COUNTIF({over},">=4")/B{n}', f'=AVERAGEIF(Answers!$C$2:$C$41,"A",{over})',
                       f'=AVERAGEIF(Answers!$C$2:$C$41,"B",{over})'])  # fmt: skip
    result.append(["All", "=SUM(B2:B7)", "=AVERAGE(C2:C7)", None, "=AVERAGE(E2:E7)"])


def gradebook(book: Book) -> None:
    """Marks, weights, a letter by lookup, the class's figures below; 'E' and 'G' are grades and no moduli."""
    page = book.active
    page.title = "Class 7b"
    page.append(["Weight", None, 0.2, 0.3, 0.5])
    page.append(["Pupil", "No.", "Test 1", "Test 2", "Exam", "Result", "Grade", "Rank"])
    for n in range(22):
        row = n + 3
        page.append([f"Pupil {letters(n + 1)}", n + 1, 40.0 + (11 * n) % 55, 45.0 + (7 * n) % 50, 38.0 + (13 * n) % 60,
                     f"=SUMPRODUCT($C$1:$E$1,C{row}:E{row})", f"=LOOKUP(F{row},$K$3:$K$7,$L$3:$L$7)",
                     f"=RANK(F{row},$F$3:$F$24)"])  # fmt: skip
    for row, (name, function) in enumerate([("Mean", "AVERAGE"), ("Best", "MAX"), ("Lowest", "MIN")], start=25):
        page.append([name, None, *(f"={function}({c}3:{c}24)" for c in "CDEF")])
        assert page.max_row == row
    page["K2"], page["L2"] = "From", "Grade"
    for row, (limit, grade) in enumerate([(0.0, "G"), (50.0, "E"), (60.0, "C"), (75.0, "B"), (90.0, "A")], start=3):
        page.cell(row, 11, limit)
        page.cell(row, 12, grade)


def invoice(book: Book) -> None:
    """Lines with a quantity and its unit, a discount, two rates of tax, an empty remainder of lines."""
    page = book.active
    page.title = "Invoice"
    page["A1"], page["F1"], page["G1"] = "Invoice 2031-0417", "Date", DAY
    page["A3"], page["B3"] = "Bill to", "Example Works, Mill Lane 5"
    page.append([])
    page.append(["Pos.", "Item", "Qty", "Unit", "Price", "VAT", "Amount"])
    items = [("Steel plate S355, t = 8 mm", 12.5, "m²", 84.0, 0.2), ("Welding", 6.0, "h", 65.0, 0.2),
             ("Delivery", 120.0, "km", 1.1, 0.2), ("Manual, printed", 2.0, "pcs", 18.0, 0.05)]  # fmt: skip
    for n in range(10):
        row = n + 6
        line = [float(n + 1), *items[n]] if n < len(items) else [None] * 6
        page.append([*line, f'=IF(C{row}="","",ROUND(C{row}*E{row},2))'])
    for name, formula in (
        ("Subtotal", "=SUM(G6:G15)"),
        ("Discount 3 %", "=-ROUND(G16*0.03,2)"),
        ("VAT 20 %", "=ROUND(SUMIF(F6:F15,0.2,G6:G15)*0.97*0.2,2)"),
        ("VAT 5 %", "=ROUND(SUMIF(F6:F15,0.05,G6:G15)*0.97*0.05,2)"),
        ("Total", "=SUM(G16:G19)"),
    ):
        page.append([None, None, None, None, name, None, formula])
    page["A22"], page["B22"] = "Due", "=G1+30"
    page["B22"].number_format = "yyyy-mm-dd"


def mortgage(book: Book) -> None:
    """A loan paid back by equal rates over ten years, month by month; the last balance is nought."""
    page = book.active
    page.title = "Loan"
    for row, (name, value) in enumerate(
        [("Principal P", 240000.0), ("Rate r p.a.", 0.036), ("Term T (years)", 10.0), ("Payments a year n", 12.0),
         ("Payment", "=-PMT(B2/B4,B3*B4,B1)"), ("Total interest I", "=SUM(C9:C128)"), ("Fees", 350.0)], start=1,
    ):  # fmt: skip
        page.cell(row, 1, name)
        page.cell(row, 2, value)
    page["B2"].number_format = "0.00%"
    for column, name in enumerate(("No.", "Balance", "Interest", "Repayment", "Left"), start=1):
        page.cell(8, column, name)
    for row in range(9, 129):
        before = "$B$1" if row == 9 else f"E{row - 1}"
        for column, value in enumerate(
            (row - 8, f"={before}", f"=B{row}*$B$2/$B$4", f"=$B$5-C{row}", f"=B{row}-D{row}"), start=1
        ):
            page.cell(row, column, value)
    page["G1"], page["H1"] = "Cost of the loan", "=B6+B7"
    page["A9"].fill = PatternFill("solid", fgColor="FFEEEEEE")


BUILDERS: dict[str, Callable[[Book], None]] = {
    one.__name__: one
    for one in (budget, timetable, pivot_report, form, gantt, inventory, survey, gradebook, invoice, mortgage)
}


def build(name: str, folder: Path) -> Path:
    """Build one of them, its stored values computed."""
    from doubler.workbook.evaluate import NotEvaluated, evaluate
    from doubler.workbook.graph import build_graph
    from doubler.workbook.reader import read_workbook
    from doubler.workbook.writer import write_filled

    book = openpyxl.Workbook()
    BUILDERS[name](book)
    bare, path = folder / f"{name}_bare.xlsx", folder / f"{name}.xlsx"
    book.save(bare)
    read = read_workbook(bare)
    values = evaluate(build_graph(read))
    stored = {
        (sheet.name, *address): value
        for sheet, address, _ in read.formulas()
        if not isinstance(value := values.value(sheet.name, address), NotEvaluated)
    }
    write_filled(bare, path, {}, stored)
    bare.unlink()
    return path
