"""Telling an empty cell, and an argument left out, from a true zero."""

import pytest

from doubler.hosts.calc_blanks import EMPTY, OMITTED, UNKNOWN, UNREAD, ZERO, Blanks, Sheets, calls_in, literal, range_of

NAMES = {"STRESS_AXIAL", "SECTION_ROUND_AREA"}


class Book(Sheets):
    def __init__(self, cells, formulas):
        self.cells, self.known = cells, formulas

    def formulas(self):
        return [("own", formula) for formula in self.known]

    def state(self):
        return (id(self), True)

    def value(self, _, reference):
        return self.cells.get(reference[1])

    def is_empty(self, _, reference):
        return reference[1] not in self.cells


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
