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
    "two_rows": """!sheet Joint
Limit load per fastener [lbf]|640 {p}
Ultimate factor|1.5 {su}
Fitting factor|1.15 {ff}
Bearing strength [lbf]|1400 {fb}
Shear strength [lbf]|2620 {fs}
Mode|Load [lbf]|Strength [lbf]|MS
Bearing|={p}*{su}*{ff}|={fb}|=C7/B7-1
Fastener shear|={$p}*{$su}*{$ff} {load}|={fs}|=C8/B8-1 {ms}
""",
    "strains": """!sheet Plies
Ply|1|2
Strain limit µε|4500|3800
Applied strain µε|2900|3100
Margin of safety|=B2/B3-1 {ms}|=C2/C3-1
""",
    "build_up": """!sheet Rack
Item|Mass|Load factor|Load
|kg||N
Tray|42|3|=B3*9.80665*C3
Power unit|61|3|=B4*9.80665*C4
Subtotal|||=SUM(D3:D4)
Frame|27|3|=B6*9.80665*C6 {f}
Cables|9|3|=B7*9.80665*C7
Total|||=D5+D6+D7
Rating|||5500
Ratio|||=D8/D9
""",
    "columns": """!sheet Flange
Quantity|Seating|Operating|Unit
Gasket force|118|84|kN
End thrust|12|95|kN
Bolt force|=B2+B3|=C2+C3 {op}|kN
Tensile area|1884|1884|mm²
Bolt stress|=B4*1000/B5|=C4*1000/C5|MPa
Allowed stress|160|160|MPa
Utilisation|=B6/B7|=C6/C7|-
""",
    "turned": """!sheet Stress
sigma_x|84 {sx}|MPa
tau_xy|41 {t}|MPa
sigma at 30 deg|={sx}/2+{sx}/2*COS(RADIANS(60))+{t}*SIN(RADIANS(60)) {s}|MPa
""",
    "girder": """!sheet Girder
GANTRY GIRDER
SPAN|8.0 {l}|M
HOIST LOAD|52.5 {w}|KN
SECOND MOMENT|23130 {i}|CM4
YOUNG'S MODULUS|210000 {e}|MPA
DEFLECTION|={w}*1000*({l}*1000)^3/(48*{e}*{i}*10000) {d}|MM
""",
    "key": """!sheet Key
Shear stress in key, MPa|36 {tau}
Surface pressure, MPa|91 {p}
Allowable pressure, MPa|110 {pa}
Allowable shear, MPa|60 {ta}
Reserve on pressure, RF|={pa}/{p}
Reserve on shear, RF|={ta}/{tau} {rf}
""",
    "stringer": """!sheet Section
Element|b|h|A|y|A·y
|in|in|in2|in|in3
Flange|1.2|0.08|=B3*C3|0.04|=D3*E3
Web|0.08|1.34|=B4*C4|0.75|=D4*E4 {m}
Cap|0.9|0.08|=B5*C5|1.46|=D5*E5
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
    ("strains", "ms", "=B3/B2-1", "margin-form"),
    ("build_up", "f", "=B6*C6", "unit-label"),
    ("columns", "op", "=B2+C3", "pattern-break"),
    ("turned", "s", "={sx}/2+{sx}/2*COS(60)+{t}*SIN(60)", "angle-unit"),
    ("girder", "d", "={w}*({l}*1000)^3/(48*{e}*{i}*10000)", "unit-scale"),
    ("key", "rf", "={ta}/{p}", "allowable-mixed"),
    ("stringer", "m", "0.11", "pasted-number"),
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
    others = {cell for kind_of, cell in found if kind_of != "negative-margin"}
    assert others <= {book.address(at)[1]}


def test_a_margin_in_a_fill_is_asked_by_itself_where_its_load_is_another_formula(tmp_path: Path) -> None:
    (tmp_path / "book.txt").write_text(SHEETS["two_rows"], encoding="utf-8")
    book = read_written(tmp_path / "book.txt")
    report = check(build(book, tmp_path / "wrong.xlsx", Fault("factor-missing", "ms", {"load": "={$p}*{$su}"})))
    found = [(f.kind, f.cell) for f in report.findings if f.severity != "note"]
    assert found == [("factor-missing", book.address("ms")[1])]
