"""Margins in tables: under headers that stand off from their units, by the sign of the load, with partial factors."""

from __future__ import annotations

from pathlib import Path

import pytest
from tests.check.written_sheets import Fault, build, read_written

from doubler.check.examination import check

SHEETS = {
    "reserves": """!sheet Reserves
Mode|Allowable|Applied|R.F.|M.S.

|MPa|MPa||
Tension|410|350|={r}|
""".replace("={r}|", "=B4/C4 {rf}|=B4/C4-1 {ms}"),
    "truss": """!sheet Truss
Truss members (tension +)
Fcy (psi)|51000 {fcy}
Ftu (psi)|66000 {ftu}
Member|P (lbf)|A (in2)|Stress (psi)|MS
A|9000|0.18|=B5/C5|={$ftu}/D5-1
B|-7000|0.21|=B6/C6|={$fcy}/ABS(D6)-1 {c}
""",
    "limit_state": """!sheet Member
N_Ed|300 {n}|kN
A|4200 {a}|mm²
f_y|275 {fy}|N/mm²
γM0|1.05 {g0}
γM1|1.1 {g1}
χ|0.7 {chi}
N_pl,Rd|={a}*{fy}/{g0}/1000 {pl}|kN
N_b,Rd|={chi}*{a}*{fy}/{g1}/1000 {nb}|kN
Utilisation, section|={n}/{pl}|-
Utilisation, buckling|={n}/{nb}|-
""",
    "bracket": """!sheet Bracket
Factor of safety|1.5 {fs}
Axial load limit|4000 {P}|N
Side load limit|900 {Q}|N
Area|80 {A}|mm²
Axial stress ult|={P}*{fs}/{A} {s1}|MPa
Side stress ult|={Q}*{fs}/{A} {s2}|MPa
Total stress ult|={s1}+{s2} {s}|MPa
Ftu|480 {ftu}|MPa
MS|={ftu}/{s}-1
Utilisation|={s}/{ftu} {u}
""",
    "cases": """!sheet Joint
LC|F1|F2|F3|Largest
|kN|kN|kN|kN
101|3.1|2.6|2.4|=MAX(B3:D3)
102|4.2|3.3|3.1|=MAX(B4:D4) {m}
103|2.2|2.0|1.9|=MAX(B5:D5)
""",
}
WRONG = [
    ("reserves", "rf", "=C4/B4", "margin-form"),
    ("reserves", "ms", "=B4/C4", "margin-form"),
    ("truss", "c", "={$ftu}/ABS(D6)-1", "allowable-mixed"),
    ("limit_state", "nb", "={chi}*{a}*{fy}/1000", "factor-missing"),
    ("bracket", "s2", "={Q}/{A}", "factor-missing"),
    ("bracket", "u", "={ftu}/{s}", "margin-form"),
    ("cases", "m", "=MAX(B4:C4)", "short-range"),
]


@pytest.mark.parametrize("name", SHEETS)
def test_the_sheets_as_they_should_be_are_silent(tmp_path: Path, name: str) -> None:
    (tmp_path / "book.txt").write_text(SHEETS[name], encoding="utf-8")
    report = check(build(read_written(tmp_path / "book.txt"), tmp_path / "right.xlsx"))
    assert [f.message for f in report.findings if f.severity != "note"] == []
    assert report.traced == report.formulas


@pytest.mark.parametrize(("name", "at", "formula", "kind"), WRONG)
def test_one_fault_is_found_at_its_cell(tmp_path: Path, name: str, at: str, formula: str, kind: str) -> None:
    (tmp_path / "book.txt").write_text(SHEETS[name], encoding="utf-8")
    book = read_written(tmp_path / "book.txt")
    report = check(build(book, tmp_path / "wrong.xlsx", Fault(kind, at, {at: formula})))
    found = [(f.kind, f.cell) for f in report.findings if f.severity != "note"]
    assert (kind, book.address(at)[1]) in found
    assert {cell for _, cell in found} == {book.address(at)[1]}
