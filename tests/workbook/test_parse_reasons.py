"""A formula that cannot be parsed is refused in words that say what to write."""

import pytest

from doubler.cli import main
from doubler.workbook.parse import FormulaError, parse


@pytest.mark.parametrize(
    ("formula", "said"),
    [
        ('=STRESS_AXIAL("12 kN";"150 mm^2";"MPa")', "its arguments are parted by ';'; write ','"),
        ("=STRESS_AXIAL(12 kN,150 mm^2)", 'a value with its unit is a text; write "12 kN"'),
        ("=12.5e3 N·m", 'write "12.5e3 N·m"'),
        ("=STRESS_AXIAL(“12 kN”,“150 mm^2”)", "typographic quotation marks; write straight ones"),
        ("=SUM(1,2", "write the ')' that is missing"),
        ("=SUM(1,2))", "write the '(' that is missing"),
        ('="a', "a quotation mark is opened and not closed"),
        ("='x!A1", "an apostrophe is opened and not closed"),
        ("={1,2;3}", "the rows of an array are not equally long"),
        ("=", "it is empty"),
        ("=1+", "it ends where a value is due"),
        ("=3**4", r"'*' is not expected where it stands (character 4)"),
        ('=SUM("(;",1', "write the ')' that is missing"),
    ],
)
def test_what_is_wrong_and_what_to_write(formula: str, said: str) -> None:
    with pytest.raises(FormulaError) as caught:
        parse(formula, (1, 1))
    assert said in str(caught.value)
    assert "Token" not in str(caught.value)
    assert "ParserError" not in str(caught.value)


@pytest.mark.parametrize("formula", ["=A1", "=B5*2", '=STRESS_AXIAL(B1:C1,"150 mm^2")', "=SUM(Sheet2!A1:A3)"])
def test_eval_has_no_cells(capsys: pytest.CaptureFixture[str], formula: str) -> None:
    assert main(["eval", formula]) == 2
    said = capsys.readouterr()
    assert said.out == ""
    assert "reads cells, and there are none here; write their values instead" in said.err
