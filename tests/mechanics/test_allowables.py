"""Allowables from a user's table: the right rows, cited, and nothing beyond them."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from doubler import mechanics
from doubler.catalogue import call_cells, lookup
from doubler.errors import ErrorValue, InputError
from doubler.mechanics import allowables

mechanics.load()
MATERIAL = ["Alloy 1", "Alloy 1", "Alloy 1", "Alloy 2", "Alloy 1"]
BASIS = ["A", "B", "A", "A", "A"]
CELSIUS = np.array([20.0, 20.0, 150.0, 20.0, 100.0]) + 273.15
MPA = np.array([400.0, 430.0, 300.0, 500.0, 360.0])
SOURCE = ["Report 7, table 1", "Report 7, table 2", "Report 8, table 1", "", "Report 7, table 1"]
TABLE = (MATERIAL, BASIS, CELSIUS)


def at(celsius: float, material: str = "Alloy 1", basis: str = "A") -> float:
    return float(allowables.allowable(material, basis, celsius + 273.15, *TABLE, MPA))


def cited(celsius: float, material: str = "Alloy 1", basis: str = "A") -> str:
    return str(allowables.allowable_source(material, basis, celsius + 273.15, *TABLE, SOURCE))


@pytest.mark.parametrize(("celsius", "expected"), [(20, 400), (60, 380), (100, 360), (125, 330), (150, 300)])
def test_rows_of_one_material_and_basis_are_read_whatever_their_order(celsius: float, expected: float) -> None:
    assert at(celsius) == pytest.approx(expected)


def test_the_rows_that_were_read_are_cited() -> None:
    assert cited(20.0) == "row 1: Report 7, table 1"
    assert cited(125.0) == "row 5: Report 7, table 1; row 3: Report 8, table 1"
    assert cited(20.0, basis="B") == "row 2: Report 7, table 2"
    assert cited(20.0, material="Alloy 2") == "row 4: no source given"


@pytest.mark.parametrize("celsius", [19.9, 150.1, -50.0])
def test_there_is_no_extrapolation(celsius: float) -> None:
    for call in (at, cited):
        with pytest.raises(InputError, match="no extrapolation"):
            call(celsius)


def test_a_single_row_serves_at_its_own_temperature_alone() -> None:
    assert at(20.0, basis="B") == 430.0
    with pytest.raises(InputError, match="no extrapolation"):
        at(20.1, basis="B")


def test_another_basis_or_material_is_never_put_in_its_place() -> None:
    with pytest.raises(InputError, match="no basis 'S' of Alloy 1; it has A, B"):
        at(20.0, basis="S")
    with pytest.raises(InputError, match="no material 'Alloy 3'; it has Alloy 1, Alloy 2"):
        at(20.0, material="Alloy 3")
    with pytest.raises(InputError, match="no basis 'B' of Alloy 2"):
        at(20.0, material="Alloy 2", basis="B")
    assert at(20.0, material="ALLOY  1", basis="a") == 400.0


def test_two_rows_for_one_temperature_are_refused() -> None:
    with pytest.raises(InputError, match="rows 1 and 2"):
        allowables.allowable("M", "A", 300.0, ["M", "M"], ["A", "A"], np.array([300.0, 300.0]), np.array([1.0, 2.0]))


@given(share=st.floats(0.0, 1.0))
@settings(max_examples=40, deadline=None)
def test_between_two_rows_the_value_lies_between_theirs(share: float) -> None:
    celsius = 100.0 + 50.0 * share
    assert 300.0 - 1e-9 <= at(celsius) <= 360.0 + 1e-9
    assert at(celsius) == pytest.approx(360.0 - 60.0 * share)


def test_several_temperatures_are_read_each_and_one_outside_spares_the_others() -> None:
    function = lookup("MARGIN_ALLOWABLE")
    assert function is not None
    table = (
        [["Material"], *([m] for m in MATERIAL)],
        [["Basis"], *([b] for b in BASIS)],
        [["°C"], *([v - 273.15] for v in CELSIUS.tolist())],
        [["F [MPa]"], *([v] for v in MPA.tolist())],
    )
    found = call_cells(function, ["Alloy 1", "A", [["°C"], [60.0], [400.0], [20.0]], *table, "MPa"])
    assert [row[0] if isinstance(row[0], ErrorValue) else round(row[0], 6) for row in found.grid] == [
        380.0,
        ErrorValue.NUM,
        400.0,
    ]
    fahrenheit = call_cells(function, ["Alloy 1", "A", "302 °F", *table, "ksi"])
    assert fahrenheit.grid[0][0] == pytest.approx(300.0 / 6.894757293168361)


def test_a_table_with_an_empty_last_cell_never_shifts_its_rows() -> None:
    function = lookup("MARGIN_ALLOWABLE")
    assert function is not None
    table = ([["X"], ["M"], ["M"]], [["A"]] * 3, [["20 °C"], ["50 °C"], [None]], [["1 MPa"], ["2 MPa"], [None]])
    found = call_cells(function, ["M", "A", "20 °C", *table])
    assert isinstance(found.grid[0][0], ErrorValue)
    assert "same rows" in found.reasons[0]


def test_columns_of_unlike_length_are_refused() -> None:
    with pytest.raises(InputError, match="equally long"):
        allowables.allowable("Alloy 1", "A", 293.15, *TABLE, MPA[:4])
    with pytest.raises(InputError, match="same rows"):
        allowables.allowable_source("Alloy 1", "A", 293.15, *TABLE, SOURCE[:4])
