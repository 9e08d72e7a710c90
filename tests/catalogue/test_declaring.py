"""What is refused when a function is declared, and what a look at the whole declaration finds."""

import subprocess
import sys
from typing import Any

import pytest

from doubler.catalogue import WorksheetFunction, lookup, worksheet_function
from doubler.catalogue.annotations import Force, Text, of
from doubler.catalogue.limits import POSITIVE, at_least, below, between, condition


def kernel(force: Force) -> Force:
    """Give the force.

    Parameters
    ----------
    force : force
        It.

    Returns
    -------
    same : force
        It again.
    """
    return force


@pytest.mark.parametrize(
    "name", ["STRESS", "STRESS_", "stress_axial", "COLOUR_RED", "Stress_Axial", "STRESS_É", "_AXIAL"]
)
def test_a_name_that_is_no_category_and_thing_is_refused_at_once(name: str) -> None:
    with pytest.raises(TypeError, match="CATEGORY_THING in capitals"):
        worksheet_function(name)(kernel)
    assert lookup(name) is None or lookup(name) is lookup("STRESS_AXIAL")


def test_a_name_declared_twice_is_refused() -> None:
    from doubler import mechanics

    mechanics.load()
    with pytest.raises(TypeError, match="STRESS_AXIAL is declared twice"):
        worksheet_function("STRESS_AXIAL")(kernel)


def test_limits_of_unknown_arguments_are_refused_at_once() -> None:
    with pytest.raises(TypeError, match="unknown arguments area"):
        worksheet_function("UNIT_NEVER", valid={"area": POSITIVE})(kernel)
    rule = condition("the area must be large", lambda area: area > 1)
    with pytest.raises(TypeError, match="unknown arguments area"):
        worksheet_function("UNIT_NEVER", conditions=[rule])(kernel)
    assert lookup("UNIT_NEVER") is None


def test_an_argument_without_a_quantity_is_found() -> None:
    def plain(force: float) -> Force:
        return force

    with pytest.raises(TypeError, match="force is annotated with no quantity"):
        WorksheetFunction("UNIT_NEVER", plain, {}, ()).check_declaration()


def test_a_kind_that_does_not_exist_is_found() -> None:
    def odd(force: of("colour")) -> Force:  # type: ignore[valid-type]
        return force

    with pytest.raises(KeyError, match="colour"):
        WorksheetFunction("UNIT_NEVER", odd, {}, ()).check_declaration()


def test_a_sound_declaration_is_read_as_it_is_written() -> None:
    def mixed(force: Force, label: Text = "a", times: of("ratio") = 2.0) -> Force:  # type: ignore[valid-type]
        return force * times

    function = WorksheetFunction("UNIT_NEVER", mixed, {"times": at_least(1.0)}, ())
    function.check_declaration()
    force, label, times = function.arguments
    assert (force.kind_name, force.optional, force.limit) == ("force", False, None)
    assert (label.is_text, label.optional, label.default) == (True, True, "a")
    assert times.limit is not None
    assert (times.default, times.limit.words) == (2.0, "must be at least 1")
    assert function.result.kind_name == "force"


@pytest.mark.parametrize(
    ("limit", "inside", "outside"),
    [
        (POSITIVE, [1e-300, 5.0], [0.0, -1.0, float("nan")]),
        (at_least(1.0), [1.0, 2.0], [0.999, float("nan")]),
        (below(2.0), [1.999, -5.0], [2.0, float("nan")]),
        (between(0.0, 1.0), [0.0, 1.0], [-1e-9, 1.0 + 1e-9, float("nan")]),
        (between(0.0, 1.0, low_open=True, high_open=True), [0.5], [0.0, 1.0]),
    ],
)
def test_a_limit_holds_its_ends_as_said(limit: Any, inside: list[float], outside: list[float]) -> None:
    import numpy as np

    assert limit.all_within(np.array(inside))
    assert limit.within(np.array(inside)).all()
    assert not limit.within(np.array(outside)).any()
    for value in outside:
        assert not limit.all_within(np.array([*inside, value]))
        assert not limit.all_within(value)


def test_the_whole_catalogue_loads_numpy_and_nothing_heavier() -> None:
    code = "import sys; from doubler import mechanics; mechanics.load(); print(*sys.modules)"
    loaded = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True).stdout.split()
    assert "numpy" in loaded
    assert not {"pint", "scipy", "pyarrow", "openpyxl", "lxml", "formualizer", "matplotlib"} & set(loaded)
