"""Section properties of rectangles and rounds: refusals, and what must hold between them."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from doubler.errors import InputError
from doubler.mechanics import sections_rectangle as rectangle
from doubler.mechanics import sections_round as round_

SIZE = st.floats(0.5, 500.0)
SHARE = st.floats(0.0, 0.98)
HOLLOW = [
    rectangle.area,
    rectangle.second_moment,
    rectangle.polar_moment,
    rectangle.section_modulus,
    rectangle.plastic_modulus,
    rectangle.first_moment,
    rectangle.radius_of_gyration,
]
BORED = [
    round_.area,
    round_.second_moment,
    round_.polar_moment,
    round_.torsion_constant,
    round_.section_modulus,
    round_.plastic_modulus,
    round_.first_moment,
    round_.radius_of_gyration,
    round_.shear_area,
]
FEW = settings(max_examples=40, deadline=None)


def name(function) -> str:
    return function.name


@pytest.mark.parametrize("function", HOLLOW, ids=name)
@pytest.mark.parametrize(
    ("sizes", "word"),
    [
        ((0.0, 20.0), "height must be positive"),
        ((30.0, -1.0), "width must be positive"),
        ((30.0, 20.0, 26.0), "both"),
        ((30.0, 20.0, None, 16.0), "both"),
        ((30.0, 20.0, 30.0, 16.0), "lower than"),
        ((30.0, 20.0, 26.0, 20.0), "narrower than"),
        ((30.0, 20.0, -1.0, 16.0), "must not be negative"),
    ],
)
def test_a_rectangle_that_cannot_be_is_refused(function, sizes, word) -> None:
    with pytest.raises(InputError, match=word):
        function(*sizes)


@pytest.mark.parametrize("function", BORED, ids=name)
@pytest.mark.parametrize(
    ("sizes", "word"),
    [((0.0,), "must be positive"), ((20.0, 20.0), "smaller than"), ((20.0, -1.0), "must not be negative")],
)
def test_a_round_that_cannot_be_is_refused(function, sizes, word) -> None:
    with pytest.raises(InputError, match=word):
        function(*sizes)


@pytest.mark.parametrize("function", [rectangle.torsion_constant, rectangle.shear_area], ids=name)
def test_a_side_that_is_not_positive_is_refused(function) -> None:
    with pytest.raises(InputError, match="must be positive"):
        function(10.0, 0.0)


def test_a_cut_outside_the_section_is_refused() -> None:
    with pytest.raises(InputError, match="inside the section"):
        rectangle.first_moment(30.0, 20.0, at=15.1)
    with pytest.raises(InputError, match="inside the section"):
        round_.first_moment(20.0, at=10.1)
    assert rectangle.first_moment(30.0, 20.0, at=15.0) == round_.first_moment(20.0, at=10.0) == 0.0


@given(height=SIZE, width=SIZE, tall=SHARE, wide=SHARE)
@FEW
def test_properties_of_a_hollow_rectangle_agree_with_one_another(height, width, tall, wide) -> None:
    sizes = (height, width, tall * height, wide * width)
    turned = (width, height, wide * width, tall * height)
    area, inertia = rectangle.area(*sizes), rectangle.second_moment(*sizes)
    assert rectangle.polar_moment(*sizes) == pytest.approx(inertia + rectangle.second_moment(*turned), rel=1e-9)
    assert rectangle.section_modulus(*sizes) == pytest.approx(2.0 * inertia / height, rel=1e-9)
    assert rectangle.radius_of_gyration(*sizes) == pytest.approx(np.sqrt(inertia / area), rel=1e-9)
    assert rectangle.plastic_modulus(*sizes) == pytest.approx(2.0 * rectangle.first_moment(*sizes), rel=1e-9)
    assert rectangle.plastic_modulus(*sizes) > rectangle.section_modulus(*sizes)


@given(diameter=SIZE, share=SHARE)
@FEW
def test_properties_of_a_tube_agree_with_one_another(diameter, share) -> None:
    sizes = (diameter, share * diameter)
    area, inertia = round_.area(*sizes), round_.second_moment(*sizes)
    assert round_.polar_moment(*sizes) == round_.torsion_constant(*sizes) == pytest.approx(2.0 * inertia)
    assert round_.section_modulus(*sizes) == pytest.approx(2.0 * inertia / diameter)
    assert round_.radius_of_gyration(*sizes) == pytest.approx(np.sqrt(inertia / area), rel=1e-9)
    assert round_.plastic_modulus(*sizes) == pytest.approx(2.0 * round_.first_moment(*sizes), rel=1e-9)
    assert 0.5 * area < round_.shear_area(*sizes) <= 6.0 / 7.0 * area * (1.0 + 1e-12)


@pytest.mark.parametrize("bore", [0.0, 0.2, 0.5, 0.8, 0.99])
def test_the_shear_area_of_a_tube_is_that_of_the_flexure_function_of_an_annulus(bore: float) -> None:
    """Cowper's integral at a Poisson's ratio of zero, with the harmonic function that frees both walls."""
    first, second = -0.75 * (1.0 + bore**2), -0.75 * bore**2
    inertia, area = np.pi / 4.0 * (1.0 - bore**4), np.pi * (1.0 - bore**2)
    integral = np.pi * (first * (1.0 - bore**4) / 4.0 + second * (1.0 - bore**2) / 2.0 + (1.0 - bore**6) / 24.0)
    coefficient = 2.0 * inertia / (-area / inertia * integral)
    assert round_.shear_area(2.0, 2.0 * bore) == pytest.approx(coefficient * area, rel=1e-9)


@given(height=SIZE, width=SIZE)
@FEW
def test_the_torsion_constant_does_not_depend_on_which_side_is_named_first(height, width) -> None:
    found = rectangle.torsion_constant(height, width)
    assert found == rectangle.torsion_constant(width, height)
    longer, shorter = max(height, width), min(height, width)
    assert found < min(longer * shorter**3 / 3.0, rectangle.polar_moment(height, width))


def test_a_thin_strip_tends_to_a_third_of_its_length_times_thickness_cubed() -> None:
    assert rectangle.torsion_constant(1e4, 1.0) == pytest.approx(1e4 / 3.0 * (1.0 - 0.630249e-4), rel=1e-9)


@given(by=st.floats(0.1, 10.0), height=SIZE, width=SIZE)
@FEW
def test_sections_grow_with_their_power_of_length(by, height, width) -> None:
    powers = {rectangle.area: 2, rectangle.second_moment: 4, rectangle.plastic_modulus: 3, rectangle.shear_area: 2}
    powers[rectangle.torsion_constant] = 4
    for function, power in powers.items():
        assert function(by * height, by * width) == pytest.approx(by**power * function(height, width), rel=1e-9)


@pytest.mark.parametrize("function", HOLLOW, ids=name)
def test_rectangles_in_arrays_agree_with_scalars(function) -> None:
    heights = np.array([30.0, 40.0, 55.0])
    assert list(function(heights, 20.0, 26.0, 16.0)) == [function(h, 20.0, 26.0, 16.0) for h in heights]


@pytest.mark.parametrize("function", BORED, ids=name)
def test_rounds_in_arrays_agree_with_scalars(function) -> None:
    bores = np.array([0.0, 8.0, 19.0])
    assert function(20.0, bores) == pytest.approx([function(20.0, bore) for bore in bores], rel=1e-15)
