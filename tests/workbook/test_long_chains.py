"""Long chains of rows without declared units: what a row hands on to the next stays small."""

from pathlib import Path

import openpyxl
import pytest

from doubler.workbook import carried
from doubler.workbook.carried import Open, contradictory, multiply, power, unknown
from doubler.workbook.examined import Examined

# Short enough that a doubling from row to row shows as a number and not as a computer without memory.
ROWS = 20


@pytest.mark.parametrize(
    "formula",
    [
        "=A{p}*A{p}*0.5",
        "=A{p}+A{p}*0.003",
        "=A{p}*(1+B{r}/12)*1.1-A{p}/1000",
        "=IF(A{p}>3,A{p}*2,A{p}/A{q})",
        "=A{p}*A{q}*1000/25.4",
        "=(B2+C2)*A{p}*A{p}",
        "=FOO(A{p})*A{p}",
    ],
)
def test_a_row_that_reads_the_one_before_twice_hands_on_no_more_than_it_got(tmp_path: Path, formula: str) -> None:
    page = (book := openpyxl.Workbook()).active
    page["B1"], page["C1"] = "Length [mm]", "Load [kN]"
    page["A2"], page["A3"], page["B2"], page["C2"] = 1.0, 1.1, 4.0, 3.0
    for row in range(4, 4 + ROWS):
        page.cell(row, 1, formula.format(p=row - 1, q=row - 2, r=row))
        page.cell(row, 2, 0.02 * row)
    book.save(tmp_path / "chain.xlsx")
    examined = Examined.read(tmp_path / "chain.xlsx")
    judgement = examined.tracing.verdict("Sheet", (3 + ROWS, 1))
    assert judgement is not None
    node = judgement.passed
    assert len(node.factors) <= carried.MOST_KEPT
    assert len(node.hidden) <= carried.MOST_KEPT
    assert len(node.rooted_at) <= carried.MOST_ROOTS
    assert all(len(reading.used) <= carried.MOST_USES for reading in node.readings)


def test_roots_are_kept_once() -> None:
    node = contradictory([("Sheet", (1, 1))])
    for _ in range(16):
        node = multiply(node, node)
    assert node.rooted_at == (("Sheet", (1, 1)),)


def test_inputs_that_were_too_many_to_remember_never_cancel() -> None:
    many = unknown(("Sheet", (1, 1)))
    for row in range(2, carried.MOST_OPENS + 10):
        many = multiply(many, unknown(("Sheet", (row, 1))))
    assert len(many.opens) == carried.MOST_OPENS
    quotient = multiply(many, power(many, carried.Fraction(-1)))
    assert quotient.opens
    assert all(isinstance(item, Open) and item.exponent is None for item in quotient.opens)
