"""Shear in its right form, in Hooke's law, Mohr's circle and the criteria; each formula once right and once wrong."""

from pathlib import Path

import pytest
from tests.check.written_sheets import Fault, build, read_written

from doubler.check.examination import check

SHEET = """!sheet Strain
Strains and stresses at the gauge
ε_x | 500 {ex} | µε
ε_y | -150 {ey} | µε
γ_xy | 320 {g} | µε
ε_xy (tensor) | ={g}/2 {et} | µε
Mean strain | =({ex}+{ey})/2 {m} | µε
Radius of Mohr's circle | =SQRT((({ex}-{ey})/2)^2+({g}/2)^2) {R} | µε
Principal strain ε_1 | ={m}+{R} {e1} | µε
ε1 | =({ex}+{ey})/2+SQRT((({ex}-{ey})/2)^2+({g}/2)^2) {e1s} | µε
Maximum shear strain γ_max | =2*{R} {gm} | µε
Shear modulus G | 27 {G} | GPa
Young's modulus E | 71 {E} | GPa
Shear stress τ_xy | ={G}*{g}/1000 {t} | MPa
Shear stress from tensor strain | =2*{G}*{et}/1000 {t2} | MPa
Bending stress | 120 {fb} | MPa
Tresca stress | =SQRT({fb}^2+4*{t}^2) {tr} | MPa
Von Mises stress | =SQRT({fb}^2+3*{t}^2) {vm} | MPa
Principal stress | ={fb}/2+SQRT(({fb}/2)^2+{t}^2) {pr} | MPa
Shear strain again γ | ={t}/{G}*1000 {g2} | µε
"""
WRONG = [
    ("t2", "={G}*{et}/1000", "shear-strain-form"),
    ("t", "=2*{G}*{g}/1000", "shear-strain-form"),
    ("t", "={E}*{g}/1000", "modulus-mismatch"),
    ("R", "=SQRT((({ex}-{ey})/2)^2+{g}^2)", "shear-strain-form"),
    ("gm", "={R}", "shear-strain-form"),
    ("e1s", "=({ex}+{ey})/2+SQRT((({ex}-{ey})/2)^2+{g}^2)", "shear-strain-form"),
    ("et", "={g}", "shear-strain-form"),
    ("tr", "=SQRT({fb}^2+3*{t}^2)", "shear-strain-form"),
    ("vm", "=SQRT({fb}^2+{t}^2)", "shear-strain-form"),
    ("pr", "={fb}/2+SQRT(({fb}/2)^2+4*{t}^2)", "shear-strain-form"),
    ("g2", "={t}/(2*{G})*1000", "shear-strain-form"),
]


def test_the_right_forms_are_silent(tmp_path: Path) -> None:
    (tmp_path / "strain.txt").write_text(SHEET, encoding="utf-8")
    report = check(build(read_written(tmp_path / "strain.txt"), tmp_path / "right.xlsx"))
    assert [f.message for f in report.findings if f.severity != "note"] == []


@pytest.mark.parametrize(("at", "formula", "kind"), WRONG)
def test_a_wrong_form_is_found_at_its_cell(tmp_path: Path, at: str, formula: str, kind: str) -> None:
    (tmp_path / "strain.txt").write_text(SHEET, encoding="utf-8")
    book = read_written(tmp_path / "strain.txt")
    report = check(build(book, tmp_path / "wrong.xlsx", Fault(kind, at, {at: formula})))
    wrong = [(f.kind, f.cell) for f in report.findings if f.severity != "note"]
    assert wrong == [(kind, book.address(at)[1])]
