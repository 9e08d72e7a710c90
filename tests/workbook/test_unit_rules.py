"""The unit rule of each worksheet function: every native one has a rule, and each kind of rule does what it says."""

from __future__ import annotations

import pytest

from doubler.workbook.alike import describe
from doubler.workbook.natives import NATIVES
from doubler.workbook.unit_rules import rule_for
from workbook.small_books import only, rows, told, traced


def test_every_native_function_has_a_unit_rule() -> None:
    assert sorted(name for name in NATIVES if rule_for(name) is None) == []


def test_a_function_that_is_neither_native_nor_ours_has_none() -> None:
    assert rule_for("NO.SUCH.FUNCTION") is None


TABLE = rows(
    ("T [°C]", "Fty [MPa]", "E [GPa]", "P [kN]", "A [mm2]"),
    (20, 400, 72, 3, 100),
    (100, 380, 70, 4, 200),
    (150, 350, 66, 5, 300),
)

RIGHT = [
    ("=SUM(D2:D4)", "kN"),
    ("=MAX(B2:B4)", "MPa"),
    ("=AVERAGE(B2:B4)", "MPa"),
    ("=LARGE(D2:D4,2)", "kN"),
    ("=ROUND(D2,1)", "kN"),
    ("=ABS(-D2)", "kN"),
    ("=SQRT(E2)", "mm"),
    ("=POWER(E2,1.5)", "mm^3"),
    ("=E2^0.5", "mm"),
    ("=PRODUCT(D2,E2)", "kN·mm^2"),
    ("=SUMPRODUCT(D2:D4,E2:E4)", "kN·mm^2"),
    ("=SUMPRODUCT(D2:D4*E2:E4)", "kN·mm^2"),
    ("=SUMSQ(D2:D4)", "kN^2"),
    ("=SQRT(SUMSQ(D2:D4))", "kN"),
    ("=VLOOKUP(100,A2:E4,2)", "MPa"),
    ("=VLOOKUP(100,A2:E4,3,FALSE)", "GPa"),
    ('=HLOOKUP("P [kN]",A1:E4,2,FALSE)', "kN"),
    ("=INDEX(A2:E4,2,4)", "kN"),
    ("=INDEX(C2:C4,MATCH(100,A2:A4,0))", "GPa"),
    ("=LOOKUP(100,A2:A4,E2:E4)", "mm2"),
    ("=XLOOKUP(100,A2:A4,B2:B4)", "MPa"),
    ('=SUMIF(A2:A4,">50",D2:D4)', "kN"),
    ('=SUMIFS(D2:D4,A2:A4,">50",E2:E4,">1")', "kN"),
    ('=MAXIFS(D2:D4,A2:A4,">50")', "kN"),
    ("=FORECAST(60,B2:B4,A2:A4)", "MPa"),
    ("=SLOPE(B2:B4,A2:A4)", "MPa/K"),
    ("=INTERCEPT(B2:B4,A2:A4)", "MPa"),
    ("=IF(A2>50,B2,B3)", "MPa"),
    ("=IFERROR(B2,B3)", "MPa"),
    ("=IFERROR(D2/E2,0)", "kN/mm^2"),
    ("=CHOOSE(2,B2,B3)", "MPa"),
    ('=SWITCH("a","a",B2,"b",B3)', "MPa"),
    ("=IFS(A2>50,B2,A2<=50,B3)", "MPa"),
    ("=COUNT(B2:B4)", "-"),
    ('=COUNTIF(B2:B4,">360")', "-"),
    ("=ATAN2(B2,B3)", "rad"),
    ("=DEGREES(ATAN(B2/B3))", "deg"),
    ("=EXP(-B2/B3)", "-"),
    ("=LN(B2/B3)", "-"),
    ("=SIGN(B2)*B3", "MPa"),
    ("=MOD(D2,D3)", "kN"),
    ("=CEILING(D2,0.5)", "kN"),
    ('=CONVERT(D2*1000,"N","lbf")', "lbf"),
    ("=STDEV(B2:B4)", "MPa"),
    ("=SUBTOTAL(9,D2:D4)", "kN"),
    ("=AVERAGEIF(A2:A4,100,B2:B4)", "MPa"),
    ("=MEDIAN(D2:D4)", "kN"),
    ("=LET(x,D2,x*1000/E2)", "MPa"),
    ("=PI()*E2", "mm2"),
    ("=D2%", "kN"),
    ("=-D2", "kN"),
    ("=MAX(D2:D4,0)", "kN"),
    ("=MIN(1,B2/B3)", "-"),
]


@pytest.mark.parametrize(("formula", "unit"), RIGHT)
def test_a_result_has_the_unit_of_its_rule(formula, unit) -> None:
    tracing = traced(TABLE | {"H9": formula, "I9": unit})
    assert told(tracing) == [], tracing.findings[0].message
    verdict = tracing.verdict("S1", (9, 8))
    assert verdict is not None
    assert verdict.state == "sound", verdict.reason


@pytest.mark.parametrize(("formula", "unit"), [r for r in RIGHT if r[1] not in ("-", "rad", "deg") and "%" not in r[0]])
def test_and_no_other_dimension(formula, unit) -> None:
    del unit
    found = only(traced(TABLE | {"H9": formula, "I9": "kg/s"}))
    assert found.place == "H9"
    assert found.kind == "unit-label"


WRONG = [
    ("=SUM(D2:E4)", "unit-clash"),
    ("=MAX(B2,C2)", "unit-clash"),
    ("=VLOOKUP(D2,A2:E4,2)", "unit-clash"),
    ("=MATCH(B2,A2:A4)", "unit-clash"),
    ("=IF(A2>B2,1,0)", "unit-clash"),
    ("=EXP(B2)", "unit-clash"),
    ("=ATAN2(B2,D2)", "unit-clash"),
    ("=SIN(D2)", "unit-clash"),
    ("=IFERROR(B2,D2)", "unit-clash"),
    ("=MOD(D2,E2)", "unit-clash"),
    ("=FORECAST(D2,B2:B4,A2:A4)", "unit-clash"),
    ('=SUMIF(A2:A4,D2,B2:B4)', "unit-clash"),
    ('=CONVERT(D2,"N","lbf")', "unit-scale"),
    ("=EXP(C2/B2)", "unit-scale"),
]  # fmt: skip


@pytest.mark.parametrize(("formula", "kind"), WRONG)
def test_arguments_that_contradict_each_other_are_found(formula, kind) -> None:
    found = only(traced(TABLE | {"H9": formula}))
    assert (found.place, found.kind, found.severity) == ("H9", kind, "error")


def test_what_is_not_fixed_by_the_arguments_is_not_traced() -> None:
    tracing = traced(
        TABLE | {"H9": "=OFFSET(A1,B2,C2)", "I9": "MPa", "H10": "=INDEX(A2:E4,2,F1)", "H11": "=B2^COUNT(D2:D4)"}
    )
    assert told(tracing) == []
    assert tracing.counts()["not traced"] == 3


def test_a_unit_is_named_by_what_entered() -> None:
    verdict = traced(TABLE | {"H9": "=D2/E2"}).verdict("S1", (9, 8))
    assert verdict is not None
    assert verdict.carried is not None
    assert describe(verdict.carried) == "kN/mm2"


OURS = [
    ('=STRESS_AXIAL("12 kN","150 mm^2","MPa")', "MPa", []),
    ('=STRESS_AXIAL(B1:C1,B2:C2,"MPa")', "MPa", []),
    ('=STRESS_AXIAL(B1:C1,B2:C2,"MPa")', "ksi", [("B3", "unit-scale", "error")]),
    ('=STRESS_AXIAL(B1:C1,B2:C2,"MPa")', "kN", [("B3", "unit-label", "error")]),
    ('=STRESS_AXIAL(B2:C2,B1:C1,"MPa")', "MPa", [("B3", "unit-clash", "error")]),
    ('=STRESS_AXIAL(B1,B2,"N-mm")', "MPa", [("B3", "unit-scale", "error")]),
    ('=STRESS_AXIAL(B1&" "&C1,B2&" "&C2,"MPa")', "MPa", []),
    ('=STRESS_AXIAL(UNIT_ATTACH(B1,C1),B2&C2,"MPa")', "MPa", []),
    ('=STRESS_AXIAL(B1&" kN",B2&" mm2","MPa")', "MPa", []),
    ('=STRESS_AXIAL(B1&" N",B2&" mm2","MPa")', "MPa", [("B3", "unit-scale", "error")]),
    ('=STRESS_AXIAL(UNIT_ATTACH(B1,C2),B2:C2,"MPa")', "MPa", [("B3", "unit-clash", "error")]),
]


@pytest.mark.parametrize(("formula", "unit", "expected"), OURS)
def test_our_own_functions_follow_their_declaration(formula, unit, expected) -> None:
    assert told(traced(rows(("P", 12, "kN"), ("A", 150, "mm^2"), ("Stress", formula, unit)))) == expected
