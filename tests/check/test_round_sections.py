"""Diameters and radii, told apart by their labels where the dimension is the same; each formula right and wrong."""

from __future__ import annotations

from pathlib import Path

import pytest
from tests.check.written_sheets import Fault, build, read_written

from doubler.check.examination import check

SHEET = """!sheet Round
Outer diameter D | 60 {D} | mm
Inner diameter d | 40 {d} | mm
Pin radius | 8 {pr} | mm
Wall thickness t | 10 {t} | mm
Internal pressure | 12 {p} | MPa
Bending moment M | 900 {M} | N·m
Area of tube | =PI()/4*({D}^2-{d}^2) {A} | mm²
Area of pin | =PI()*{pr}^2 {Ap} | cm²
Second moment of tube | =PI()/64*({D}^4-{d}^4) {I} | mm⁴
Section modulus of bar | =PI()*{D}^3/32 {W} | mm³
Bending stress | ={M}*1000*{D}/2/{I} {sb} | MPa
Hoop stress | ={p}*{d}/2/{t} {sh} | MPa
""".replace("=PI()*{pr}^2 {Ap}", "=PI()*({pr}/10)^2 {Ap}")
WRONG = [
    ("A", "=PI()*({D}^2-{d}^2)", "4 times too large"),
    ("Ap", "=PI()/4*({pr}/10)^2", "4 times too small"),
    ("I", "=PI()/4*({D}^4-{d}^4)", "16 times too large"),
    ("W", "=PI()*{D}^3/4", "8 times too large"),
    ("sb", "={M}*1000*{D}/{I}", "2 times too large"),
    ("sh", "={p}*{d}/{t}", "2 times too large"),
]


def test_the_right_forms_are_silent(tmp_path: Path) -> None:
    (tmp_path / "round.txt").write_text(SHEET, encoding="utf-8")
    report = check(build(read_written(tmp_path / "round.txt"), tmp_path / "right.xlsx"))
    assert [f.message for f in report.findings if f.severity != "note"] == []


@pytest.mark.parametrize(("at", "formula", "says"), WRONG)
def test_a_diameter_taken_for_a_radius_is_found(tmp_path: Path, at: str, formula: str, says: str) -> None:
    (tmp_path / "round.txt").write_text(SHEET, encoding="utf-8")
    book = read_written(tmp_path / "round.txt")
    report = check(build(book, tmp_path / "wrong.xlsx", Fault("unit-scale", at, {at: formula})))
    found = [f for f in report.findings if f.severity != "note"]
    assert [(f.kind, f.cell) for f in found] == [("unit-scale", book.address(at)[1])]
    assert says in found[0].message
