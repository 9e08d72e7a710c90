"""Plane stress states: found by their words in several layouts, worked out, and drawn as Mohr's circles."""

import math
import re
from collections.abc import Callable
from pathlib import Path

import openpyxl
import pytest
from openpyxl.worksheet.worksheet import Worksheet

from check.record_books import recorded
from doubler.check.mohr_circle import mohr_circle
from doubler.check.plane_states import PlaneState, part_of, plane_states
from doubler.workbook.examined import Examined


def states(folder: Path, draw: Callable[[Worksheet], None]) -> list[PlaneState]:
    page = (made := openpyxl.Workbook()).active
    page.title = "Skin"
    draw(page)
    made.save(folder / "skin.xlsx")
    return plane_states(Examined.read(folder / "skin.xlsx"))


def rows(*lines: tuple[object, ...]) -> Callable[[Worksheet], None]:
    return lambda page: [page.append(line) for line in lines] and None


LAYOUTS = {
    "labels with brackets": rows(("Normal stress σx [MPa]", 80.0), ("Normal stress σy [MPa]", -35.0),
                                 ("Shear stress τxy [MPa]", 42.0)),
    "symbol and unit cells": rows(("Stress in x", "σ_x", 80.0, "MPa"), ("Stress in y", "σ_y", -35.0, "MPa"),
                                  ("In-plane shear stress", "τ_xy", 42.0, "MPa")),
    "words alone": rows(("Stress in x-direction", 80.0, "MPa"), ("Stress in y-direction", -35.0, "MPa"),
                        ("Shear stress xy", 42.0, "MPa")),
    "headers with a unit row": rows(("Point", "sigma_x", "sigma_y", "tau_xy"), ("", "MPa", "MPa", "MPa"),
                                    ("P1", 80.0, -35.0, 42.0)),
    "another order and another unit": rows(("Shear stress τxy [kPa]", 42000.0), ("Stress σ_yy [MPa]", -35.0),
                                           ("Stress σ_xx [MPa]", 80.0)),
    "formulas": rows(("Load in x [N]", 8000.0), ("Stress σx [MPa]", "=B1/100"), ("Stress σy [MPa]", "=-B1/100+45"),
                     ("Shear stress τxy [MPa]", "=42")),
}  # fmt: skip


@pytest.mark.parametrize("layout", LAYOUTS)
def test_a_state_is_found_in_each_layout_and_worked_out(tmp_path: Path, layout: str) -> None:
    (state,) = states(tmp_path, LAYOUTS[layout])
    x, y, xy = 80.0, -35.0, 42.0
    assert (state.sigma_x, state.sigma_y, state.tau_xy) == pytest.approx((x, y, xy))
    # The invariants, and the direction in which no shear is left, by rotation of the tensor.
    assert state.sigma_1 + state.sigma_2 == pytest.approx(x + y)
    assert state.sigma_1 * state.sigma_2 == pytest.approx(x * y - xy * xy)
    assert state.angle is not None
    turn = math.radians(state.angle)
    assert (y - x) * math.sin(turn) * math.cos(turn) + xy * math.cos(2 * turn) == pytest.approx(0.0, abs=1e-9)
    along = x * math.cos(turn) ** 2 + y * math.sin(turn) ** 2 + 2 * xy * math.sin(turn) * math.cos(turn)
    assert along == pytest.approx(state.sigma_1)
    assert state.von_mises == pytest.approx(math.sqrt(x * x - x * y + y * y + 3 * xy * xy))
    assert state.largest_shear == pytest.approx((state.sigma_1 - state.sigma_2) / 2)


def test_two_tensions_have_their_largest_shear_across_the_part(tmp_path: Path) -> None:
    (state,) = states(tmp_path, rows(("σx [MPa]", 100.0), ("σy [MPa]", 40.0), ("τxy [MPa]", 0.0)))
    assert (state.shear_in_plane, state.largest_shear, state.angle) == (30.0, 50.0, 0.0)


@pytest.mark.parametrize(
    "draw",
    [
        rows(("σx [MPa]", 80.0), ("σy [MPa]", -35.0)),
        rows(("Strain εx [µε]", 80.0), ("Strain εy [µε]", -35.0), ("Shear strain γxy [µε]", 42.0)),
        rows(("σx [mm]", 80.0), ("σy [mm]", -35.0), ("τxy [mm]", 42.0)),
        rows(("Allowable σx [MPa]", 80.0), ("Allowable σy [MPa]", -35.0), ("Allowable τxy [MPa]", 42.0)),
        rows(("σx [MPa]", 80.0), ("σy [MPa]", -35.0), *[("", "")] * 9, ("τxy [MPa]", 42.0)),
        rows(("Section modulus Sx", 80.0), ("Section modulus Sy", 35.0), ("Sxy", 42.0)),
    ],
)
def test_what_is_no_plane_stress_state_is_none(tmp_path: Path, draw: Callable[[Worksheet], None]) -> None:
    assert states(tmp_path, draw) == []


def test_a_stress_that_is_no_number_makes_no_state(tmp_path: Path) -> None:
    assert states(tmp_path, rows(("σx [MPa]", "=1/0"), ("σy [MPa]", 1.0), ("τxy [MPa]", 2.0))) == []


@pytest.mark.parametrize(
    ("words", "part"),
    [("sigma max", None), ("sigmax", None), ("σ1", None), ("s_xx", "x"), ("τ_{xy}", "xy"), ("Fxy", None),
     ("σx and σy", None), ("Stress ratio x", None), ("x-stress", "x")],
)  # fmt: skip
def test_words_mean_one_of_three_or_none(words: str, part: str | None) -> None:
    assert part_of(words) == part


@pytest.mark.parametrize("given", [(80.0, -35.0, 42.0), (-35.0, 80.0, -42.0), (10.0, 10.0, 30.0), (-60.0, -20.0, 5.0)])
def test_the_drawing_holds_x_and_y_on_the_circle_at_the_doubled_angle(
    tmp_path: Path, given: tuple[float, float, float]
) -> None:
    (state,) = states(tmp_path, rows(*zip(("σx [MPa]", "σy [MPa]", "τxy [MPa]"), given, strict=True)))
    svg = mohr_circle(state)
    number = r"(-?[\d.]+)"
    round_ = re.search(rf'class="round" cx="{number}" cy="{number}" r="{number}"', svg)
    assert round_
    centre_x, centre_y, radius = map(float, round_.groups())
    points = [tuple(map(float, one)) for one in re.findall(rf'class="point" cx="{number}" cy="{number}"', svg)]
    assert len(points) == 2
    for x, y in points:
        assert math.hypot(x - centre_x, y - centre_y) == pytest.approx(radius, abs=0.2)
    # From the right-hand end, σ1, counter-clockwise on the screen: X lies 2θ back, Y across from it.
    seen = math.degrees(math.atan2(-(points[0][1] - centre_y), points[0][0] - centre_x))
    assert state.angle is not None
    assert math.cos(math.radians(seen + 2 * state.angle)) == pytest.approx(1.0, abs=1e-3)
    assert (points[0][0] + points[1][0]) / 2 == pytest.approx(centre_x, abs=0.1)
    inside = [float(v) for v in re.findall(r' c?x="(-?[\d.]+)"', svg)]
    assert min(inside) >= 0
    assert max(inside) <= 440


def test_a_state_alike_in_all_directions_and_one_of_nothing_are_drawn(tmp_path: Path) -> None:
    for number in (25.0, 0.0):
        (state,) = states(tmp_path, rows(("σx [MPa]", number), ("σy [MPa]", number), ("τxy [MPa]", 0.0)))
        assert state.angle is None
        assert "nan" not in mohr_circle(state).lower()


def test_the_record_draws_the_governing_states_and_lists_all(tmp_path: Path) -> None:
    page = (made := openpyxl.Workbook()).active
    page.title = "Skin"
    for line in (("Point", "σx [MPa]", "σy [MPa]", "τxy [MPa]"), *((f"P{n}", 10.0 * n, 5.0, 1.0) for n in range(9))):
        page.append(line)
    other = made.create_sheet("Old units")
    rows(("σx [psi]", 900.0), ("σy [psi]", 0.0), ("τxy [psi]", 0.0))(other)
    made.save(tmp_path / "skin.xlsx")
    record = recorded(tmp_path / "skin.xlsx", tmp_path / "out")
    text = record.html.read_text(encoding="utf-8")
    assert text.count('<svg class="mohr"') == 4
    assert "<h3>Skin!B10, C10, D10</h3>" in text
    assert "10 states of plane stress are on the sheets; the 4 with the highest equivalent stress are drawn" in text
    assert "Old units" in text  # listed, and not drawn: 900 psi are less than 80 MPa
    assert "<h3>&#39;Old units&#39;" not in text
