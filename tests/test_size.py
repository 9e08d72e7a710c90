"""Solving one input so that every case meets a target."""

import math
import re
from pathlib import Path

import pytest

from doubler.errors import InputError
from doubler.size import size
from strap_book import cases_csv, strap_template


@pytest.fixture
def template(tmp_path: Path) -> Path:
    return strap_template(tmp_path / "strap.xlsx")


def test_the_smallest_thickness_that_every_case_allows(template: Path, tmp_path: Path) -> None:
    cases = cases_csv(tmp_path / "cases.csv", "case,load [kN],width [mm]\nlight,10,40\nheavy,90,50\nsteady,24,40\n")
    answer = size(template, "thickness", ("1", "50"), "ms_yield >= 0", cases)
    due = 1.5 * 90e3 / (320 * 50)
    ((first, last),) = answer.stretches
    assert math.isclose(first, due, rel_tol=1e-12)
    assert first >= due * (1 - 1e-15)
    assert last == 50.0
    assert answer.governing[0][1] == "heavy"
    assert answer.governing[0][2] >= 0
    assert "8.4375 mm or more meets ms_yield >= 0 in all 3 cases" in answer.sentence


def test_the_largest_load_of_the_template_itself(template: Path) -> None:
    answer = size(template, "load", ("0.1 kN", "200000 lbf"), "ms_yield >= 0.25")
    ((first, last),) = answer.stretches
    assert math.isclose(last, 320 * 200 / (1.5 * 1.25) / 1000, rel_tol=1e-12)
    assert first == answer.low


def test_the_printed_value_meets_the_target_itself(template: Path) -> None:
    for factor, width in ((1.15, 33.0), (1.7, 41.0), (1.31, 77.0), (1.5, 50.0)):
        cases = cases_csv(template.with_name("c.csv"), f"case,load [kN],width [mm],factor\na,90,{width},{factor}\n")
        for vary, between, word in (("thickness", ("1", "50"), "or more"), ("load", ("1", "500"), "or less")):
            if vary == "load":
                cases_csv(cases, f"case,thickness [mm],width [mm],factor\na,7,{width},{factor}\n")
            sentence = size(template, vary, between, "ms_yield >= 0", cases).sentence
            number = float(re.search(rf"([\d.]+) \w+ {word}", sentence)[1])  # type: ignore[index]
            thickness, load = (number, 90.0) if vary == "thickness" else (7.0, number)
            assert 320 * width * thickness >= factor * load * 1e3 * (1 - 1e-15), sentence


def test_nothing_meets_the_target(template: Path) -> None:
    answer = size(template, "thickness", ("1", "2"), "ms_yield >= 9")
    assert not answer.found
    assert answer.nearest is not None
    assert answer.nearest[0] == 2.0
    assert answer.sentence.startswith("No thickness between 1 and 2 mm meets ms_yield >= 9")


def test_two_stretches_are_both_told(tmp_path: Path) -> None:
    template = strap_template(tmp_path / "strap.xlsx", {"ms_yield": "=(C5-10)^2-4"})
    answer = size(template, "thickness", ("1", "20"), "ms_yield >= 0")
    assert [tuple(round(end, 9) for end in pair) for pair in answer.stretches] == [(1.0, 8.0), (12.0, 20.0)]


def test_where_it_cannot_be_computed_the_target_is_not_met(tmp_path: Path) -> None:
    template = strap_template(tmp_path / "strap.xlsx", {"ms_yield": "=SQRT(C5-10)"})
    answer = size(template, "thickness", ("1", "20"), "ms_yield >= 0")
    assert math.isclose(answer.stretches[0][0], 10.0, rel_tol=1e-12)


@pytest.mark.parametrize(
    ("vary", "between", "target", "message"),
    [
        ("thicknes", ("1", "2"), "ms_yield >= 0", "did you mean 'thickness'"),
        ("area", ("1", "2"), "ms_yield >= 0", "is an output"),
        ("thickness", ("2", "1"), "ms_yield >= 0", "the first value must be the smaller one"),
        ("thickness", ("1", "inf"), "ms_yield >= 0", "is no finite number"),
        ("thickness", ("1", "2 kN"), "ms_yield >= 0", "cannot be converted"),
        ("thickness", ("1", "2"), "ms_yield", "write an output and its bound"),
        ("thickness", ("1", "2"), "ms_ultimate >= 0", "has no output 'ms_ultimate'"),
    ],
)
def test_bad_calls(template: Path, vary: str, between: tuple[str, str], target: str, message: str) -> None:
    with pytest.raises(InputError, match=message):
        size(template, vary, between, target)


def test_the_cases_may_not_set_what_is_varied(template: Path, tmp_path: Path) -> None:
    cases = cases_csv(tmp_path / "cases.csv", "case,thickness [mm]\na,5\n")
    with pytest.raises(InputError, match="sets thickness itself"):
        size(template, "thickness", ("1", "2"), "ms_yield >= 0", cases)
