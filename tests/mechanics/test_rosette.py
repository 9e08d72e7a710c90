import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from doubler.catalogue import CallError, cell
from doubler.mechanics import hooke, rosette, rosette_transverse, strain_plane

STRAIN = st.floats(-0.005, 0.005)
LAYOUTS = {"rectangular": (0.0, 45.0, 90.0), "delta": (0.0, 60.0, 120.0)}


def readings(x: float, y: float, xy: float, degrees) -> np.ndarray:
    """What gauges at these angles read, by turning the strain tensor."""
    found = []
    for angle in np.radians(degrees):
        n = np.array([np.cos(angle), np.sin(angle)])
        found.append(n @ np.array([[x, xy / 2], [xy / 2, y]]) @ n)
    return np.array(found)


@pytest.mark.parametrize("layout", LAYOUTS)
@settings(max_examples=30)
@given(STRAIN, STRAIN, STRAIN)
def test_a_rosette_gives_back_the_strain_that_it_lies_in(layout: str, x: float, y: float, xy: float) -> None:
    a, b, c = map(float, readings(x, y, xy, LAYOUTS[layout]))
    assert rosette.plane(a, b, c, layout) == pytest.approx([x, y, xy], abs=1e-14)
    assert rosette.principal(a, b, c, layout) == pytest.approx(
        [strain_plane.principal_max(x, y, xy), strain_plane.principal_min(x, y, xy)], abs=1e-14
    )
    by_fit = rosette.fit([a, b, c], np.radians(LAYOUTS[layout]))
    assert by_fit == pytest.approx([x, y, xy], abs=1e-14)


@pytest.mark.parametrize("layout", LAYOUTS)
@pytest.mark.parametrize("degrees", [-80.0, -20.0, 35.0, 90.0])
def test_the_angle_points_at_the_larger_principal_strain(layout: str, degrees: float) -> None:
    angle = np.radians(degrees)
    x, y = 3e-4 + 7e-4 * np.cos(2 * angle), 3e-4 - 7e-4 * np.cos(2 * angle)
    a, b, c = map(float, readings(x, y, 14e-4 * np.sin(2 * angle), LAYOUTS[layout]))
    off = np.degrees(rosette.angle(a, b, c, layout)) - degrees
    assert (off + 90.0) % 180.0 - 90.0 == pytest.approx(0.0, abs=1e-9)


def test_stresses_are_the_principal_ones_of_hookes_law() -> None:
    a, b, c = 1e-3, -2e-4, -3e-4
    x, y, xy = rosette.plane(a, b, c, "rectangular")
    sx, sy, txy = hooke.plane_stress(float(x), float(y), float(xy), 70e3, 0.3)
    low, high = np.linalg.eigvalsh([[sx, txy], [txy, sy]])
    assert rosette.stresses(a, b, c, "rectangular", 70e3, 0.3) == pytest.approx([high, low], rel=1e-12)


def test_a_column_of_readings_gives_a_row_each() -> None:
    found = cell('=STRESS_ROSETTE({100;0},{300;0},{-200;0},"rectangular","180 GPa",0.28,"MPa")')
    assert len(found) == 2
    assert found[1] == [0.0, 0.0]


def test_a_rosette_alike_in_all_directions_has_no_angle() -> None:
    for layout in LAYOUTS:
        for reading in (0.0, 1e-4, 1.37e-4, 7.77e-5):
            with pytest.raises(CallError, match="none is principal"):
                rosette.angle(reading, reading, reading, layout)


def test_more_gauges_are_fitted_and_a_wrong_one_shows() -> None:
    degrees = [0.0, 30.0, 75.0, 120.0, 150.0]
    good = readings(4e-4, -1e-4, 3e-4, degrees)
    angles = np.radians(degrees)
    assert rosette.fit(good, angles) == pytest.approx([4e-4, -1e-4, 3e-4], abs=1e-15)
    assert rosette.residual(good, angles) == pytest.approx(0.0, abs=1e-15)
    bad = good.copy()
    bad[2] += 1e-4
    design = np.column_stack([np.cos(angles) ** 2, np.sin(angles) ** 2, np.sin(angles) * np.cos(angles)])
    solved, *_ = np.linalg.lstsq(design, bad, rcond=None)
    assert rosette.fit(bad, angles) == pytest.approx(solved, rel=1e-10)
    assert rosette.residual(bad, angles) == pytest.approx(np.abs(bad - design @ solved).max(), rel=1e-10)


@pytest.mark.parametrize(
    ("degrees", "why"),
    [([0.0, 180.0, 90.0], "three directions"), ([0.0, 1.0, 2.0], "three directions"), ([0.0, 90.0], "three gauges")],
)
def test_gauges_that_do_not_settle_the_strain_are_refused(degrees, why: str) -> None:
    with pytest.raises(CallError, match=why):
        rosette.fit([1e-4] * len(degrees), np.radians(degrees))


def test_columns_of_unlike_length_and_a_residual_of_three_are_refused() -> None:
    with pytest.raises(CallError, match="equally long"):
        rosette.fit([1e-4] * 4, np.radians([0.0, 45.0, 90.0]))
    with pytest.raises(CallError, match="four gauges"):
        rosette.residual([1e-4] * 3, np.radians([0.0, 45.0, 90.0]))


@pytest.mark.parametrize("layout", LAYOUTS)
@settings(max_examples=30)
@given(STRAIN, STRAIN, STRAIN, st.floats(-0.09, 0.09), st.floats(0.2, 0.35))
def test_readings_spoilt_by_transverse_sensitivity_are_freed_from_it(layout, x, y, xy, kt, nu0) -> None:
    degrees = np.array(LAYOUTS[layout])
    true, across = readings(x, y, xy, degrees), readings(x, y, xy, degrees + 90.0)
    spoilt = [float(rosette_transverse.indicated(a, t, kt, nu0)) for a, t in zip(true, across, strict=True)]
    assert rosette_transverse.rosette(*spoilt, layout, kt, nu0) == pytest.approx(true, abs=1e-14)


def test_a_tee_is_freed_too_and_a_gauge_in_its_calibration_field_needs_it_not() -> None:
    a = float(rosette_transverse.indicated(1e-3, -4e-4, 0.02))
    b = float(rosette_transverse.indicated(-4e-4, 1e-3, 0.02))
    assert rosette_transverse.tee(a, b, 0.02) == pytest.approx([1e-3, -4e-4], rel=1e-12)
    assert rosette_transverse.indicated(1e-3, -0.285e-3, 0.05) == pytest.approx(1e-3, rel=1e-14)
    assert rosette_transverse.error(-0.4, 0.02) == pytest.approx(a / 1e-3 - 1, rel=1e-10)


def test_a_sensitivity_written_in_per_cent_without_its_sign_is_refused() -> None:
    with pytest.raises(CallError, match="transverse_sensitivity"):
        rosette_transverse.error(-1.0, 0.9)
