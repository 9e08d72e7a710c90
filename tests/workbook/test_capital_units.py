"""Units in capitals: read where capitals lose nothing, left alone where they might be symbols or words."""

from __future__ import annotations

import pytest

from doubler.workbook.capital_units import in_capitals, in_right_case

READ = [
    ("PSI", False, "psi"),
    ("IN-LBF", False, "in-lbf"),
    ("IN²", False, "in²"),
    ("LBF/IN^2", False, "lbf/in^2"),
    ("LOAD IN LBF", False, "LOAD IN lbf"),
    ("STRESS, KSI", False, "STRESS, ksi"),
    ("MPA", True, "MPa"),
    ("N/MM2", True, "N/mm2"),
    ("DENSITY (KG/M3)", True, "DENSITY (kg/m3)"),
]
LEFT = [
    ("MPA", False),
    ("KN", False),
    ("M", True),
    ("K", True),
    ("OK", True),
    ("LUG B", True),
    ("MPa", True),
    ("FTU", False),
]


@pytest.mark.parametrize(("text", "metric", "expected"), READ)
def test_capitals_are_read(text: str, metric: bool, expected: str) -> None:
    assert in_right_case(text, metric) == expected


@pytest.mark.parametrize(("text", "metric"), LEFT)
def test_what_may_be_a_symbol_or_a_word_is_left_alone(text: str, metric: bool) -> None:
    assert in_right_case(text, metric) == text


def test_a_sheet_is_in_capitals_when_all_its_words_are() -> None:
    assert in_capitals(["PIN LUG", "LIMIT LOAD", "BEARING AREA", "in2", "PL"])
    assert not in_capitals(["PIN LUG", "Limit load", "BEARING AREA"])
    assert not in_capitals(["LUG", "KN"])
