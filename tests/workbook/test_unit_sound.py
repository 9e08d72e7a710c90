"""Whole calculations as engineers lay them out: sound ones are left alone, and one wrong label is one finding."""

from __future__ import annotations

import time

import openpyxl
import pytest

from doubler.workbook.graph import build_graph
from doubler.workbook.reader import read_workbook
from doubler.workbook.unit_flow import trace
from workbook.small_books import book, cell_of, only, rows, sheet_of, told, traced

LUG = rows(
    ("Project", "Attachment", None, "Date", 45000),
    ("Parameter", "Symbol", "Value", "Unit", "Source"),
    ("Lug width", "W", 60, "mm", "Drawing A"),
    ("Hole diameter", "D", 25, "mm", "Drawing A"),
    ("Thickness", "t", 12, "mm", "Drawing A"),
    ("Edge distance", "e", 32, "mm", "Drawing A"),
    ("e/D", "", "=C6/C4", "-", ""),
    ("Material", "7075-T6"),
    ("Ultimate tensile strength", "Ftu", 530, "MPa", "Handbook"),
    ("Limit load", "P", 55, "kN", "LC 12"),
    ("Ultimate factor", "FSu", 1.5, "-", ""),
    ("Fitting factor", "FF", 1.15, "-", ""),
    ("Ultimate load", "Pu", "=C10*C11*C12", "kN", ""),
    ("Net tension area", "At", "=(C3-C4)*C5", "mm²", ""),
    ("Net tension stress", "ft", "=C13*1000/C14", "MPa", ""),
    ("Shear-out area", "As", "=2*C5*(C6-C4/2*COS(RADIANS(40)))", "mm²", ""),
    ("Shear-out stress", "fs", "=C13*1000/C16", "MPa", ""),
    ("MS net tension", "", "=0.9*C9/C15-1"),
    ("MS shear", "", "=0.6*C9/C17-1"),
    ("Minimum MS", "", "=MIN(C18:C19)"),
    ("Status", "", '=IF(C20>=0,"OK","NOT OK")'),
)
BEAM = rows(
    ("Simply supported beam",),
    ("Span L, m", 3.2),
    ("UDL w, kN/m", 12),
    ("Point load P, kN", 20),
    ("Section modulus Wy, cm3", 653),
    ("Second moment Iy, cm4", 9800),
    ("E, GPa", 210),
    ("Mmax, kNm", "=B3*B2^2/8+B4*B2/4"),
    ("sigma, MPa", "=B8*1000/B5"),
    ("Deflection UDL, mm", "=5*B3*B2^4/(384*B7*B6)*10^5"),
    ("Deflection P, mm", "=B4*B2^3/(48*B7*B6)*1E5"),
    ("Total, mm", "=B10+B11"),
    ("Limit L/300, mm", "=B2*1000/300"),
    ("Utilisation", "=B12/B13"),
    ("Self weight, kg/m", 42),
    ("w self, kN/m", "=B15*9.81/1000"),
)
FASTENERS = rows(
    ("Fastener", "x (in)", "y (in)", "A (in^2)", "x·A", "y·A", "xc", "yc", "r^2"),
    *[
        (i, i * 0.5, i * 0.25, 0.05, f"=B{r}*D{r}", f"=C{r}*D{r}", f"=B{r}-$B$8", f"=C{r}-$B$9", f"=G{r}^2+H{r}^2")
        for i, r in ((1, 2), (2, 3), (3, 4), (4, 5))
    ],
    ("Sum", None, None, "=SUM(D2:D5)", "=SUM(E2:E5)", "=SUM(F2:F5)"),
    (None,),
    ("x bar", "=E6/D6", "in"),
    ("y bar", "=F6/D6", "in"),
)
SECTION = rows(
    ("Section", "b [mm]", "h [mm]", "A [mm²]", "y [mm]", "A·y [mm³]", "I0 [mm⁴]", "A·d² [mm⁴]"),
    *[
        (r, 20, 5 * r, f"=B{r}*C{r}", f"=C{r}/2", f"=D{r}*E{r}", f"=B{r}*C{r}^3/12", f"=D{r}*(E{r}-$B$7)^2")
        for r in (2, 3, 4)
    ],
    ("Σ", None, None, "=SUM(D2:D4)", None, "=SUM(F2:F4)", "=SUM(G2:G4)", "=SUM(H2:H4)"),
    (None,),
    ("y_c", "=F5/D5", "mm"),
    ("I", "=G5+H5", "mm4"),
    ("i", "=SQRT(B8/D5)", "mm"),
    ("W", "=B8/MAX(B7,C4-B7)", "mm³"),
)
THERMAL = rows(
    ("Quantity", "Value", "Unit", "Remark"),
    ("E_al", 70, "GPa", "typ."),
    ("α_al", 23.1, "1e-6/K", ""),
    ("α_st", 12, "µm/m/°C", ""),
    ("T_ref", 20, "°C", "assembly"),
    ("T_op", 85, "°C", "max"),
    ("ΔT", "=B6-B5", "°C", ""),
    ("Δε", "=(B3-B4)*1E-6*B7", "mm/mm", ""),
    ("Δε", "=(B3-B4)*B7", "µε", ""),
    ("sigma", "=B8*B2*1000", "MPa", ""),
)
FATIGUE = rows(
    ("Block", "σa [MPa]", "n [cycles]", "N [cycles]", "n/N"),
    *[(r, 100 + 10 * r, 1000, f"=10^((LOG10($B$7)-LOG10(B{r}))*$B$8)*1E6", f"=C{r}/D{r}") for r in (2, 3, 4)],
    ("Total damage", None, None, None, "=SUM(E2:E4)"),
    (None,),
    ("Fatigue limit", 80, "MPa"),
    ("Slope k", 5),
)
SHAFT = rows(
    ("Speed", 3000, "rpm"),
    ("Angular speed", "=B1*2*PI()/60", "rad/s"),
    ("Power", 5, "kW"),
    ("Torque", "=B3*1000/B2", "N·m"),
    ("Torque", "=B3*9549/B1", "N·m"),
    ("Frequency", "=B1/60", "Hz"),
    ("Diameter", 25, "mm"),
    ("tau", "=16*B4*1000/(PI()*B7^3)", "MPa"),
)
PROPERTIES = rows(
    ("Property", "Value", "Unit"),
    ("E", 71, "GPa"),
    ("Fty", 420, "MPa"),
    ("Density", 2800, "kg/m3"),
    (None,),
    ("Yield", '=VLOOKUP("Fty",A2:C4,2,FALSE)', "MPa"),
    ("Modulus", '=INDEX(B2:B4,MATCH("E",A2:A4,0))', "GPa"),
    ("Density", '=XLOOKUP("Density",A2:A4,B2:B4)', "kg/m3"),
)
SOUND = {
    "lug": LUG, "beam": BEAM, "fasteners": FASTENERS, "section": SECTION, "thermal": THERMAL, "fatigue": FATIGUE,
    "shaft": SHAFT, "properties": PROPERTIES,
}  # fmt: skip


@pytest.mark.parametrize("name", SOUND)
def test_a_sound_calculation_is_left_alone_and_all_of_it_is_traced(name) -> None:
    tracing = traced(SOUND[name])
    assert [f.message for f in tracing.findings] == []
    counts = tracing.counts()
    assert counts["not traced"] == 0, {root: tracing.reason(root) for root in tracing.not_traced()}
    assert counts["sound"] > 0


def changed(cells, place, text):
    assert place in cells
    return cells | {place: text}


ONE_LABEL = [
    ("lug", "D9", "ksi", "C9", "unit-scale"),
    ("lug", "D10", "N", "C13", "unit-scale"),
    ("lug", "D13", "N", "C13", "unit-scale"),
    ("lug", "D14", "mm", "C14", "unit-label"),
    ("lug", "D15", "Pa", "C15", "unit-scale"),
    ("beam", "A2", "Span L, mm", "B2", "unit-scale"),
    ("beam", "A8", "Mmax, Nm", "B8", "unit-scale"),
    ("beam", "A10", "Deflection UDL, m", "B10", "unit-scale"),
    ("section", "D1", "A [cm²]", "D2:D4", "unit-scale"),
    ("section", "C7", "m", "B7", "unit-scale"),
    ("thermal", "C8", "µε", "B8", "unit-scale"),
    ("properties", "C6", "ksi", "B6", "unit-scale"),
    ("fasteners", "C8", "mm", "B8", "unit-scale"),
]


@pytest.mark.parametrize(("name", "place", "text", "where", "kind"), ONE_LABEL)
def test_one_wrong_label_is_one_finding(name, place, text, where, kind) -> None:
    found = only(traced(changed(SOUND[name], place, text)))
    assert (found.place, found.kind) == (where, kind)


ONE_FORMULA = [
    ("lug", "C15", "=C13/C14", "unit-scale"),
    ("lug", "C16", "=2*C5*(C6-C4/2*COS(40))", "angle-unit"),
    ("lug", "C20", "=MIN(C17:C19)", "unit-clash"),
    ("beam", "B9", "=B8/B5", "unit-scale"),
    ("beam", "B8", "=B3*B2/8+B4*B2/4", "unit-clash"),
    ("section", "B9", "=SQRT(B8)/D5", "unit-label"),
    ("thermal", "B10", "=B8*B2", "unit-scale"),
    ("shaft", "B8", "=16*B4/(PI()*B7^3)", "unit-scale"),
]


@pytest.mark.parametrize(("name", "place", "formula", "kind"), ONE_FORMULA)
def test_one_wrong_formula_is_one_finding_there(name, place, formula, kind) -> None:
    tracing = traced(changed(SOUND[name], place, formula))
    assert [(p, k) for p, k, _ in told(tracing)] == ([] if kind is None else [(place, kind)])


@pytest.mark.parametrize("name", SOUND)
def test_a_workbook_read_from_its_package_is_traced_alike(name, tmp_path) -> None:
    made = openpyxl.Workbook()
    sheet = made.active
    sheet.title = "S1"
    for place, value in SOUND[name].items():
        sheet.cell(*cell_of(place), value)
    made.save(tmp_path / "made.xlsx")
    workbook = read_workbook(tmp_path / "made.xlsx")
    tracing = trace(workbook, build_graph(workbook))
    assert told(tracing) == []
    assert tracing.counts() == traced(SOUND[name]).counts()


def test_ten_thousand_equal_formulas_are_judged_as_one() -> None:
    count = 10_000
    lines = [(f"LC{r}", 1.5, 100, f"=B{r}*1000/C{r}") for r in range(2, count + 2)]
    workbook = book(sheet_of("S1", rows(("Case", "P [kN]", "A [mm2]", "s [kPa]"), *lines)))
    graph = build_graph(workbook)
    start = time.process_time()
    tracing = trace(workbook, graph)
    took = time.process_time() - start
    assert told(tracing) == [("D2:D10001", "unit-scale", "error")]
    assert took < 3.0  # about a third of a second on an idle machine
