"""The trace of units on small sheets: each fault found where it is made, each sound sheet left alone."""

from __future__ import annotations

import pytest

from doubler.workbook.unit_verdicts import NOT_TRACED, SOUND
from workbook.small_books import only, rows, sheet_of, told, traced

STRESS = (("Force", 12, "kN"), ("Area", 150, "mm²"))


def test_the_same_formula_is_sound_as_mpa_and_a_million_off_as_pa() -> None:
    right = traced(rows(*STRESS, ("Stress", "=B1*1000/B2", "MPa")))
    assert told(right) == []
    verdict = right.verdict("S1", (3, 2))
    assert verdict is not None
    assert verdict.state == SOUND
    assert [use.text for use in verdict.uses] == ["1000"]
    wrong = only(traced(rows(*STRESS, ("Stress", "=B1*1000/B2", "Pa"))))
    assert (wrong.place, wrong.kind, wrong.severity, wrong.factor) == ("B3", "unit-scale", "error", 1e-6)
    assert "multiply the formula by 1e6, or label the cell MPa" in wrong.message


def test_a_conversion_of_what_needs_none_is_a_slip_in_waiting() -> None:
    slip = only(traced(rows(("Force", 12, "N"), ("Area", 150, "mm²"), ("Stress", "=B1*1000/B2", "MPa"))))
    assert (slip.kind, slip.severity, slip.factor) == ("unit-scale", "warning", 1000.0)
    assert "delete 1000" in slip.message


SCALE = [
    pytest.param(rows(*STRESS, ("Stress", "=B1/B2", "MPa")), "B3", 1e-3, id="unit cells"),
    pytest.param(
        rows(("Force [kN]", 12), ("Area [mm^2]", 150), ("Stress [MPa]", "=B1/B2")), "B3", 1e-3, id="brackets in labels"
    ),
    pytest.param(
        rows(("Case", "P", "A", "s"), (None, "lbf", "in^2", "ksi"), ("1", 900, 0.5, "=B3/C3")),
        "D3",
        1e3,
        id="unit row, US",
    ),
    pytest.param(
        rows(("P (kip)", "A (in2)", "s (MPa)"), (4, 0.5, "=A2/B2")), "C2", 1 / 6.894757293168361, id="headers, mixed"
    ),
    pytest.param(rows(("L", 5, "ft"), ("L", "=B1*0.3048", "mm")), "B2", 1e-3, id="metres labelled mm"),
    pytest.param(
        rows(("E", 10.3, "Msi"), ("e", 0.001, "in/in"), ("s", "=B1*B2", "ksi")), "B3", 1e-3, id="modulus and strain"
    ),
    pytest.param(rows(("Ratio of", 3, "mm"), ("over", 2, "mm"), ("Rate", "=B1/B2", "%")), "B3", 1e-2, id="percent"),
]


@pytest.mark.parametrize(("cells", "place", "factor"), SCALE)
def test_a_number_that_is_off_by_a_unit_factor_is_found_with_the_factor(cells, place, factor) -> None:
    found = only(traced(cells))
    assert (found.place, found.kind, found.severity) == (place, "unit-scale", "error")
    assert found.factor == pytest.approx(factor, rel=1e-6)


def test_a_unit_in_the_number_format_is_read() -> None:
    formats = ["General", '0.0" kN"', '0.0" mm²"', '0.0" MPa"', '0.0" GPa"']
    cells = rows(("P", 3), ("A", 5), ("s", "=B1/B2"))
    wrong = only(traced(sheet_of("S1", cells, {"B1": 1, "B2": 2, "B3": 3}), number_formats=formats))
    assert (wrong.place, wrong.kind) == ("B3", "unit-scale")
    assert told(traced(sheet_of("S1", cells, {"B1": 1, "B2": 2, "B3": 4}), number_formats=formats)) == []


CLASHES = [
    pytest.param(rows(("F1", 12, "kN"), ("F2", 150, "N"), ("Sum", "=B1+B2", "kN")), "B3", id="kN and N, sum"),
    pytest.param(rows(("F [kN]", 12), ("A [mm2]", 150), ("Sum", "=SUM(B1:B2)")), "B3", id="force and area, SUM"),
    pytest.param(rows(("s [ksi]", 12), ("t [MPa]", 150), ("Worst", "=MAX(B1,B2)")), "B3", id="ksi and MPa, envelope"),
    pytest.param(rows(("P", 9, "kN"), ("W", 4, "kg"), ("P", "=IF(B1>10,B1,B2)", "kN")), "B3", id="branches"),
    pytest.param(rows(("P", 9, "kN"), ("M", 4, "kN·m"), ("ok", '=IF(B1>B2,"OK","no")')), "B3", id="comparison"),
    pytest.param(rows(("L", 9, "mm"), ("x", 2, "mm"), ("e", "=EXP(B1*B2)", "-")), "B3", id="EXP of an area"),
]


@pytest.mark.parametrize(("cells", "place"), CLASHES)
def test_unlike_units_that_meet_are_a_clash(cells, place) -> None:
    found = only(traced(cells))
    assert (found.place, found.kind, found.severity) == (place, "unit-clash", "error")


ANGLES = [
    pytest.param(rows(("a", 30, "deg"), ("F", 5, "N"), ("Fx", "=B2*COS(B1)", "N")), "B3", id="COS of degrees"),
    pytest.param(rows(("Angle (°)", 30), ("F [lbf]", 5), ("Fy [lbf]", "=B2*SIN(B1)")), "B3", id="SIN of degrees"),
    pytest.param(rows(("y", 3, "mm"), ("x", 5, "mm"), ("theta", "=ATAN2(B2,B1)", "deg")), "B3", id="radians as deg"),
    pytest.param(rows(("a [rad]", 0.3), ("b [-]", "=TAN(RADIANS(B1))")), "B2", id="RADIANS of radians"),
    pytest.param(rows(("R", 3, "mm"), ("a", 40, "deg"), ("arc", "=B1*B2", "mm")), "B3", id="arc from degrees"),
]


@pytest.mark.parametrize(("cells", "place"), ANGLES)
def test_degrees_for_radians_and_the_reverse_are_found(cells, place) -> None:
    found = only(traced(cells))
    assert (found.place, found.kind) == (place, "angle-unit")


LABELS = [
    pytest.param(rows(("M", 5, "N·mm"), ("A", 40, "mm^2"), ("s", "=B1/B2", "MPa")), "B3", id="moment over area"),
    pytest.param(rows(("d [mm]", 5), ("I [mm^3]", "=PI()*B1^4/64")), "B2", id="fourth power labelled mm³"),
    pytest.param(rows(("F [N]", "A [mm2]", "s [N]"), (5, 3, "=A2/B2")), "C2", id="stress labelled as a force"),
    pytest.param(rows(("Fty", 50, "ksi"), ("s", 20, "ksi"), ("MS", "=B1*B2-1")), "B3", id="margin with a dimension"),
]


@pytest.mark.parametrize(("cells", "place"), LABELS)
def test_another_dimension_than_the_label_is_found(cells, place) -> None:
    found = only(traced(cells))
    assert (found.place, found.kind, found.severity) == (place, "unit-label", "error")


def test_equal_formulas_of_a_column_are_one_finding_with_the_range() -> None:
    lines = [(f"LC{i}", 1.5 * i, 100 + i, f"=B{i + 1}/C{i + 1}") for i in range(1, 6)]
    found = only(traced(rows(("Case", "P [kN]", "A [mm2]", "s [MPa]"), *lines)))
    assert found.place == "D2:D6"
    assert found.factor == pytest.approx(1e-3)


def test_a_declared_unit_is_believed_so_that_one_fault_is_one_finding() -> None:
    cells = rows(
        *STRESS, ("Stress", "=B1/B2", "MPa"), ("Fty", 400, "MPa"), ("MS", "=B4/(1.5*B3)-1"), ("Half", "=B3/2", "MPa")
    )
    assert told(traced(cells)) == [("B3", "unit-scale", "error")]


def test_one_label_behind_several_faults_is_one_finding_there() -> None:
    cells = rows(("P", 40, "N"), ("A", 2, "mm2"), ("b", 5, "mm"), ("s", "=B1*1000/B2", "MPa"), ("M", "=B1*B3", "kN·mm"))
    found = only(traced(cells))
    assert (found.place, found.kind, found.found, found.expected) == ("B1", "unit-scale", "N", "kN")
    assert [key[1] for key in found.follows] == [(4, 2), (5, 2)]


def test_a_label_that_a_sound_formula_confirms_is_not_blamed() -> None:
    cells = rows(
        ("P", 40, "N"), ("A", 2, "mm2"), ("s", "=B1/B2", "GPa"), ("t", "=B1/(2*B2)", "GPa"), ("Q", "=B1*2", "N")
    )
    assert told(traced(cells)) == [("B3", "unit-scale", "error"), ("B4", "unit-scale", "error")]


def test_an_undeclared_input_takes_the_unit_that_a_result_settles() -> None:
    tracing = traced(rows(("P", 40), ("A", 2, "mm2"), ("s", "=B1/B2", "MPa"), ("Q", 5, "N"), ("R", "=B1+B4", "N")))
    assert told(tracing) == []
    assert tracing.settled["S1", (1, 2)].sources[0].text == "N"


def test_an_input_that_two_results_settle_two_ways_is_a_finding_on_it() -> None:
    found = only(
        traced(rows(("P", 40), ("A", 2, "mm2"), ("s", "=B1/B2", "MPa"), ("Q", 5, "kN"), ("R", "=B1+B4", "kN")))
    )
    assert (found.place, found.kind, found.severity) == ("B1", "unit-clash", "error")
    assert "in N by S1!B3 but in kN by S1!B5" in found.message


def test_what_an_input_settles_to_is_used_to_judge_the_rest() -> None:
    cells = rows(("P", 40), ("A", 2, "mm2"), ("s", "=B1/B2", "MPa"), ("Q", "=2*B1/B2", "MPa"), ("R", "=B1", "kN"))
    assert told(traced(cells)) == [("B5", "unit-scale", "error")]


def test_an_empirical_formula_is_traced_under_a_reading_with_a_note() -> None:
    tracing = traced(rows(("V", 40, "m/s"), ("q", "=0.6125*B1^2", "Pa")))
    assert told(tracing) == []
    assert len(tracing.notes) == 1
    assert "0.6125 is in kg/m^3" in tracing.notes[0].message


def test_a_literal_that_would_carry_two_units_is_not_traced_once() -> None:
    tracing = traced(rows(("V", 40, "m/s"), ("q", "=0.6125*B1^2", "Pa"), ("x", "=0.6125*B1^3", "Pa")))
    assert told(tracing) == []
    lost = tracing.not_traced()
    assert list(lost) == [("S1", (3, 2))]
    assert "another unit than in B2" in tracing.reason(("S1", (3, 2)))


def test_a_lost_trace_is_told_once_at_its_root() -> None:
    cells = rows(("a", 4, "mm"), ("b", "=INDIRECT(A9)*2"), ("c", "=B2+1"), ("d", "=B3*2"))
    tracing = traced(cells)
    assert told(tracing) == []
    assert tracing.not_traced() == {("S1", (2, 2)): [("S1", (2, 2)), ("S1", (3, 2)), ("S1", (4, 2))]}
    assert tracing.counts() == {"sound": 0, "found": 0, NOT_TRACED: 3}


def test_a_circular_reference_is_not_traced_and_ends() -> None:
    tracing = traced(rows(("a", "=B2+1"), ("b", "=B1*2"), ("c", 3, "mm"), ("d", "=B3*2", "mm")))
    assert told(tracing) == []
    assert tracing.counts()[SOUND] == 1


def test_weight_from_mass_wants_the_right_gravity() -> None:
    right = traced(rows(("m", 40, "kg"), ("W", "=B1*9.81", "N"), ("W", "=B1*9.81/1000", "kN"), ("m", "=B2/9.81", "kg")))
    assert told(right) == []
    wrong = only(traced(rows(("m", 40, "kg"), ("W", "=B1*9.81", "kN"))))
    assert (wrong.place, wrong.kind, wrong.factor) == ("B2", "unit-scale", pytest.approx(1e3))


def test_a_temperature_and_a_difference_are_told_apart() -> None:
    head = (("T1", 20, "°C"), ("T2", 120, "°C"))
    right = rows(*head, ("Rise", "=B2-B1", "K"), ("Mean", "=AVERAGE(B1:B2)", "°C"), ("T2", "=B2+273.15", "K"))
    assert told(traced(right)) == []
    wrong = only(traced(rows(*head, ("T2", "=B2", "K"))))
    assert (wrong.place, wrong.kind) == ("B3", "unit-scale")
    assert "273.15" in wrong.message


def test_a_percent_sign_in_a_formula_converts_a_percentage() -> None:
    cells = rows(("P", 10, "kN"), ("Rise", 15, "%"), ("P", "=B1*(1+B2%)", "kN"), ("P", "=B1*(1+B2/100)", "kN"))
    assert told(traced(cells)) == []
    assert told(traced(cells | {"B4": "=B1*(1+B2)"})) == [("B4", "unit-scale", "error")]


def test_a_polynomial_in_one_quantity_is_a_fit() -> None:
    tracing = traced(rows(("t", 2, "mm"), ("K", "=3-3.13*B1+3.66*B1^2")))
    assert told(tracing) == []
    assert len(tracing.notes) == 1
    assert told(traced(rows(("t", 2, "mm"), ("K", "=B1+B1^2")))) == [("B2", "unit-clash", "error")]


def test_an_allowable_typed_into_a_margin_is_no_fault() -> None:
    tracing = traced(rows(("s", 150, "MPa"), ("MS", "=400/(1.5*B1)-1")))
    assert told(tracing) == []
    assert "its 400 is in MPa" in tracing.notes[0].message


def test_a_heading_of_units_is_one_only_above_units() -> None:
    assert told(traced(rows(("Units", "metric"), ("P", 3, "kN"), ("Q", "=B2*2", "kN")))) == []


@pytest.mark.parametrize("formula", ["=1.5+0.25*B1", "=2*(0.5+0.25*B1)", "=3-3.13*B1/10+3.66*(B1/10)^2"])
def test_a_fit_with_a_constant_term_may_give_another_dimension(formula) -> None:
    tracing = traced(rows(("t", 2, "mm"), ("K", formula, "-")))
    assert told(tracing) == []
    assert tracing.notes
    assert told(traced(rows(("t", 2, "mm"), ("K", "=2*B1", "-")))) == [("B2", "unit-label", "error")]


def test_a_broken_power_with_a_coefficient_is_empirical() -> None:
    cells = rows(("fck", 30, "MPa"), ("fctm", "=0.3*B1^(2/3)", "MPa"), ("fr", "=7.5*SQRT(B1)", "MPa"))
    tracing = traced(cells)
    assert told(tracing) == []
    assert [note.place for note in tracing.notes] == ["B2", "B3"]
    assert told(traced(rows(("F", 30, "MPa"), ("x", "=2*SQRT(B1)", "MPa")))) == [("B2", "unit-label", "error")]


def test_notes_of_equal_formulas_are_one() -> None:
    cells = rows(("s", "MPa", 100, 200, 300), ("MS", "-", "=235/C1-1", "=235/D1-1", "=235/E1-1"))
    tracing = traced(cells)
    assert told(tracing) == []
    assert [note.place for note in tracing.notes] == ["C2:E2"]
