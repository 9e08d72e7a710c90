"""Changing all declared units of a sheet, numbers converted, changes no physical result and no finding."""

from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from doubler.check.examination import CheckReport, report_on
from doubler.units import parse_unit
from doubler.workbook.evaluate import NotEvaluated
from doubler.workbook.examined import Examined
from doubler.workbook.model import Sheet
from workbook.small_books import book, rows, sheet_of

METRIC_TO_US = {
    "N": "lbf", "N*mm": "in-lbf", "mm": "in", "mm^2": "in^2", "mm^4": "in^4", "MPa": "psi", "-": "-",
    "kg": "slug", "°C": "°F", "N/mm": "lbf/in",
}  # fmt: skip

Line = tuple[str, float | str, str]

INPUTS: list[Line] = [
    ("Axial load P", 0.0, "N"),
    ("Bending moment M", 0.0, "N*mm"),
    ("Width b", 0.0, "mm"),
    ("Height h", 0.0, "mm"),
    ("Length L", 0.0, "mm"),
    ("Young's modulus E", 0.0, "MPa"),
    ("Yield strength Fty", 0.0, "MPa"),
    ("Safety factor", 1.5, "-"),
]
FORMULAS: list[Line] = [
    ("Area A", "=B3*B4", "mm^2"),
    ("Second moment of area I", "=B3*B4^3/12", "mm^4"),
    ("Axial stress", "=B1/B9", "MPa"),
    ("Bending stress", "=B2*(B4/2)/B10", "MPa"),
    ("Total stress", "=ABS(B11)+ABS(B12)", "MPa"),
    ("MS yield", "=B7/(B8*B13)-1", "-"),
    ("Elongation", "=B1*B5/(B9*B6)", "mm"),
    ("Euler load", "=PI()^2*B6*B10/B5^2", "N"),
    ("Radius of gyration", "=SQRT(B10/B9)", "mm"),
    ("Slenderness", "=B5/B17", "-"),
    ("Largest stress", "=MAX(B11:B13)", "MPa"),
    ("Stiffness", "=B6*B9/B5", "N/mm"),
    ("Share of strength", '=IF(B13>B7,1,B13/B7)', "-"),
    ("Axial stress again", "=STRESS_AXIAL(B1:C1,B9:C9,C22)", "MPa"),
    ("Interpolated load", "=B1+(B16-B1)*0.25", "N"),
    ("Root of sums", "=SQRT(B11^2+3*B12^2)", "MPa"),
]  # fmt: skip
FAULTS: list[Line] = [
    ("Load and length", "=B1+B5", "N"),
    ("Area, wrongly labelled", "=B3*B4", "mm"),
    ("Stress in the wrong place", "=B1*B9", "MPa"),
    ("Mixed lowest", "=MIN(B11,B15)", "MPa"),
    ("Divided by nothing", "=B1/B40", "N"),
]


def in_us(line: Line) -> Line:
    label, value, unit = line
    other = METRIC_TO_US[unit]
    if isinstance(value, float) and unit != "-":
        value *= parse_unit(unit).scale / parse_unit(other).scale
    return label, value, other


def laid_out(lines: list[Line], bracket: bool) -> Sheet:
    """Lay lines out with the unit in a cell of its own, or in a bracket of the label."""
    if bracket:
        return sheet_of("S", rows(*((f"{label} [{unit}]", value) for label, value, unit in lines)))
    return sheet_of("S", rows(*lines))


def checked(lines: list[Line], bracket: bool) -> CheckReport:
    return report_on(Examined(book(laid_out(lines, bracket))), Path("made.xlsx"))


def physical(report: CheckReport, lines: list[Line]) -> list[float | str]:
    """Return what each line gives, in consistent SI units."""
    found: list[float | str] = []
    for row, (_, _, unit) in enumerate(lines, start=1):
        value = report.book.value(("S", (row, 2)))
        assert not isinstance(value, NotEvaluated)
        found.append(value * parse_unit(unit).scale if isinstance(value, float) and unit != "-" else value)
    return found


def said(report: CheckReport) -> list[tuple[object, ...]]:
    return [(f.sheet, f.cell, f.kind, f.severity, f.cells, f.follows) for f in report.findings]


magnitudes = st.tuples(
    st.floats(-90_000, 90_000).filter(lambda p: abs(p) > 1),
    st.floats(-5e6, 5e6).filter(lambda m: abs(m) > 1),
    st.floats(3, 120),
    st.floats(3, 120),
    st.floats(200, 4000),
    st.sampled_from([71_000.0, 110_000.0, 205_000.0]),
    st.floats(50, 1800),
)


def filled(numbers: tuple[float, ...], formulas: list[Line]) -> list[Line]:
    inputs = [(label, number, unit) for (label, _, unit), number in zip(INPUTS, (*numbers, 1.5), strict=True)]
    return [*inputs, *formulas]  # fmt: skip


@pytest.mark.parametrize("bracket", [False, True])
@given(numbers=magnitudes)
@settings(max_examples=12, deadline=None)
def test_units_of_another_system_change_nothing(bracket: bool, numbers: tuple[float, ...]) -> None:
    formulas = [line for line in FORMULAS if not (bracket and "STRESS_AXIAL" in str(line[1]))]
    metric = filled(numbers, formulas)
    customary = [in_us(line) for line in metric]
    ours, theirs = checked(metric, bracket), checked(customary, bracket)
    assert physical(ours, metric) == pytest.approx(physical(theirs, customary), rel=1e-9)
    assert said(ours) == said(theirs)
    assert not [f for f in ours.findings if f.kind.startswith("unit")]
    assert ours.traced == theirs.traced == ours.formulas


@pytest.mark.parametrize("bracket", [False, True])
@given(numbers=magnitudes, chosen=st.sets(st.sampled_from(range(len(FAULTS))), min_size=1))
@settings(max_examples=12, deadline=None)
def test_faults_are_found_alike_in_both_systems(bracket: bool, numbers: tuple[float, ...], chosen: set[int]) -> None:
    formulas = [line for line in FORMULAS if not (bracket and "STRESS_AXIAL" in str(line[1]))]
    metric = filled(numbers, [*formulas, *(FAULTS[at] for at in sorted(chosen))])
    customary = [in_us(line) for line in metric]
    ours, theirs = checked(metric, bracket), checked(customary, bracket)
    assert said(ours) == said(theirs)
    assert any(f.severity == "error" for f in ours.findings)


def test_one_unit_of_another_system_is_found() -> None:
    metric = filled((12e3, 3.5e5, 40.0, 60.0, 1200.0, 71e3, 250.0), FORMULAS)
    mixed = [in_us(line) if line[0] == "Width b" else line for line in metric]
    assert any(f.kind == "unit-scale" for f in checked(mixed, False).findings)
    assert not [f for f in checked(metric, False).findings if f.kind.startswith("unit")]
