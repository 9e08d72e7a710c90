"""ISNUMBER and its kin: what kind of value a cell holds."""

import pytest

from doubler.errors import ErrorValue
from doubler.workbook.evaluate import evaluate_formula


@pytest.mark.parametrize(
    ("formula", "expected"),
    [
        ("=ISNUMBER(3)", True),
        ('=ISNUMBER("3")', False),
        ("=ISNUMBER(TRUE)", False),
        ("=ISNUMBER(Z9)", False),
        ("=ISBLANK(Z9)", True),
        ('=ISBLANK("")', False),
        ('=ISTEXT("a")', True),
        ("=ISNONTEXT(Z9)", True),
        ("=ISLOGICAL(1>0)", True),
        ("=ISERROR(NA())", True),
        ("=ISERR(NA())", False),
        ("=ISERR(1/0)", True),
        ("=ISNA(1/0)", False),
        ("=ISNA(NA())", True),
        ("=ISERROR(2)", False),
        ('=SUM(ISNUMBER({1,"a",3})*1)', 2.0),
    ],
)
def test_kind_of_value(formula: str, expected: object) -> None:
    assert evaluate_formula(formula).grid == [[expected]]


def test_na_is_the_error_value_and_propagates() -> None:
    assert evaluate_formula("=NA()+1").grid == [[ErrorValue.NA]]
