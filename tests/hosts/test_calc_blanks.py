"""Telling an empty cell, and an argument left out, from a true zero."""

import pytest

from doubler.hosts.calc_blanks import EMPTY, OMITTED, UNKNOWN, UNREAD, ZERO, Blanks, Sheets, calls_in, literal, range_of
from doubler.workbook.references import address_text

NAMES = {"STRESS_AXIAL", "SECTION_ROUND_AREA"}


class Book(Sheets):
    def __init__(self, cells, formulas, computed=()):
        self.cells, self.known, self.computed = cells, formulas, computed
        self.told = True

    def formulas(self):
        return [("own", formula) for formula in self.known]

    def state(self):
        return (id(self), self.told)

    def value(self, _, reference):
        address = address_text((reference[1][1] + 1, reference[1][0] + 1))
        return self.cells.get(address), address in self.computed

    def is_empty(self, _, reference):
        return address_text((reference[1][1] + 1, reference[1][0] + 1)) not in self.cells


@pytest.mark.parametrize(
    ("formula", "expected"),
    [
        ('=STRESS_AXIAL(A3;A2;"N-mm")', [("STRESS_AXIAL", ["A3", "A2", '"N-mm"'])]),
        ("=DOUBLER.FUNCTIONS.STRESS_AXIAL(A3;;B2)", [("STRESS_AXIAL", ["A3", "", "B2"])]),
        ("{=STRESS_AXIAL(A1:B1;A2)}", [("STRESS_AXIAL", ["A1:B1", "A2"])]),
        (
            "=MAX(STRESS_AXIAL(\"a;)(\";{1;2|3};$'S (1)'.A1);2)",
            [("STRESS_AXIAL", ['"a;)("', "{1;2|3}", "$'S (1)'.A1"])],
        ),
        ('="STRESS_AXIAL(A3;A2)"', []),
        ("=SUM(A1;A2)", []),
    ],
)
def test_calls_are_found_in_formulas(formula, expected):
    assert list(calls_in(formula, NAMES)) == expected


def kind(book, arguments, index, blank, name="STRESS_AXIAL"):
    return Blanks(NAMES).kind(book, name, arguments, index, blank)


def test_a_zero_is_an_empty_cell_where_the_formula_refers_to_one():
    book = Book({"A2": 150.0}, ['=STRESS_AXIAL(A3;A2;"N-mm")'])
    assert kind(book, (0.0, 150.0, "N-mm"), 0, EMPTY) == EMPTY
    book.cells["A3"] = 0.0
    assert kind(book, (0.0, 150.0, "N-mm"), 0, EMPTY) == ZERO


def test_another_formula_with_an_empty_cell_does_not_make_a_zero_empty():
    book = Book({"A2": 150.0, "B2": 90.0}, ['=STRESS_AXIAL(A3;A2;"N-mm")', '=STRESS_AXIAL(0;B2;"N-mm")'])
    assert kind(book, (0.0, 90.0, "N-mm"), 0, EMPTY) == ZERO


def test_two_formulas_of_the_same_values_cannot_be_told_apart_and_that_is_said():
    book = Book({"A2": 150.0}, ['=STRESS_AXIAL(A3;A2;"N-mm")', '=STRESS_AXIAL(0;A2;"N-mm")'])
    assert kind(book, (0.0, 150.0, "N-mm"), 0, EMPTY) == UNKNOWN


def test_no_formula_at_all_is_not_taken_for_a_zero():
    assert kind(Book({}, []), (0.0, 150.0, "N-mm"), 0, EMPTY) == UNKNOWN


def test_an_argument_left_out_in_the_middle_is_told_from_zero():
    book = Book({"A1": 12.0}, ['=SECTION_ROUND_AREA(A1;;"N-mm")'])
    assert kind(book, (12.0, 0.0, "N-mm"), 1, OMITTED, "SECTION_ROUND_AREA") == OMITTED


def test_literals_and_ranges_are_read():
    assert literal("-1.5E3") == (True, -1500.0)
    assert literal('"a""b"') == (True, 'a"b')
    assert literal("A1+1") == (False, None)
    assert range_of("$Sheet1.$A$1:.B2") == ("Sheet1", "A1:B2")
    assert range_of("$'my sheet'.C5") == ("my sheet", "C5")
    assert range_of("A:A") == ("", "A:A")
    assert range_of("A1+1") is None


def test_a_cell_whose_value_is_not_known_leaves_the_zero_undecided():
    book = Book({"B1": UNREAD, "A2": 0.0}, ['=STRESS_AXIAL(A3;B1;"N-mm")', '=STRESS_AXIAL(A2;B1;"N-mm")'])
    assert kind(book, (0.0, 150.0, "N-mm"), 0, EMPTY) == UNKNOWN
    assert kind(book, (0.0, 150.0, "N-m"), 0, EMPTY) == ZERO


def test_a_pair_of_cells_tells_one_call_from_another():
    formulas = ['=STRESS_AXIAL(A3;B1:C1;"N-mm")', '=STRESS_AXIAL(A4;B2:C2;"N-mm")']
    book = Book({"A4": 0.0, "B1": 1.0, "C1": "mm^2", "B2": 2.0, "C2": "mm^2"}, formulas)
    assert kind(book, (0.0, ((1.0, "mm^2"),), "N-mm"), 0, EMPTY) == EMPTY
    assert kind(book, (0.0, ((2.0, "mm^2"),), "N-mm"), 0, EMPTY) == ZERO
    assert kind(book, (0.0, ((3.0, "mm^2"),), "N-mm"), 0, EMPTY) == ZERO


def test_a_value_that_a_formula_gives_may_have_changed_so_that_the_call_must_be_found():
    book = Book(
        {"B1": 5.0, "B2": 7.0, "A4": 0.0}, ['=STRESS_AXIAL(A3;B1;"N-mm")', '=STRESS_AXIAL(A4;B2;"N-mm")'], {"B1"}
    )
    blanks = Blanks(NAMES)
    assert blanks.kind(book, "STRESS_AXIAL", (0.0, 5.0, "N-mm"), 0, EMPTY) == EMPTY
    book.cells["B1"] = 6.0
    assert blanks.kind(book, "STRESS_AXIAL", (0.0, 6.0, "N-mm"), 0, EMPTY) == UNKNOWN
    assert blanks.kind(book, "STRESS_AXIAL", (0.0, 7.0, "N-mm"), 0, EMPTY) == ZERO
    blanks.forget()
    assert blanks.kind(book, "STRESS_AXIAL", (0.0, 6.0, "N-mm"), 0, EMPTY) == EMPTY


def test_what_was_read_is_kept_until_a_change_is_told():
    book = Book({"A2": 150.0}, ['=STRESS_AXIAL(A3;A2;"N-mm")'])
    blanks = Blanks(NAMES)
    assert blanks.kind(book, "STRESS_AXIAL", (0.0, 150.0, "N-mm"), 0, EMPTY) == EMPTY
    book.cells["A3"] = 0.0
    assert blanks.kind(book, "STRESS_AXIAL", (0.0, 150.0, "N-mm"), 0, EMPTY) == EMPTY
    blanks.forget()
    assert blanks.kind(book, "STRESS_AXIAL", (0.0, 150.0, "N-mm"), 0, EMPTY) == ZERO
