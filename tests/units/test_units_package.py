"""What holds for the package as a whole: light imports, threads, pickles, examples, invariants."""

import contextlib
import doctest
import importlib
import pickle
import pkgutil
import subprocess
import sys
from fractions import Fraction

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

import doubler.units
from doubler.units import CONSISTENT_SETS, Dimension, Unit, consistent_set, convert, factor, parse_unit
from doubler.units.convert import factor_in_words, known_units_of, name_for
from doubler.units.table import atoms

MODULES = [f"doubler.units.{module.name}" for module in pkgutil.iter_modules(doubler.units.__path__)]
HEAVY = {"pint", "numpy", "scipy", "pandas", "matplotlib", "pyarrow", "openpyxl", "lxml", "formualizer", "rich"}
SPELLINGS = sorted({unit.text for unit in atoms().values() if not unit.offset and unit.kind != "change"})
units = st.sampled_from(SPELLINGS).map(parse_unit)
numbers = st.floats(min_value=-1e9, max_value=1e9).filter(lambda x: x == 0 or abs(x) > 1e-9)


def run(code: str) -> str:
    return subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True).stdout


@pytest.mark.parametrize("name", MODULES)
def test_examples_of_the_package_hold(name: str) -> None:
    assert doctest.testmod(importlib.import_module(name)).failed == 0


def test_importing_units_and_reading_text_loads_nothing_heavy() -> None:
    code = "import sys, doubler.units as u; u.parse_quantity('12 kN'); u.consistent_set('N-mm').unit_for('stress'); "
    loaded = run(code + "print(*sys.modules)").split()
    assert not HEAVY & set(loaded)


def test_help_loads_nothing_heavy() -> None:
    code = "import sys; from doubler.cli import main; main(['--help']); print('MODULES', *sys.modules)"
    loaded = run(code).rpartition("MODULES")[2].split()
    assert not HEAVY & set(loaded)
    assert not [
        name for name in loaded if name.startswith(("doubler.catalogue", "doubler.mechanics", "doubler.workbook"))
    ]


def test_eight_threads_at_once_in_a_fresh_process_read_the_same() -> None:
    code = """
import sys, threading
sys.setswitchinterval(1e-6)
from doubler.units import consistent_set, factor, parse_quantity, parse_unit, to_pint
texts = ["12 kN", "3 ksi", "20 °C", "5 in-lbf", "7 µε", "2 MPa√m", "30 deg", "9 ppm/°F"]
gate, found, faults = threading.Barrier(8), [None] * 8, []
def work(k):
    try:
        gate.wait()
        rows = []
        for text in texts[k:] + texts[:k]:
            value, unit = parse_quantity(text)
            rows.append((text, value, unit.scale, unit.dimension.name, to_pint(value, unit).to_base_units().magnitude))
        sets = [consistent_set(n).unit_for("density").scale for n in ("N-mm", "N-m", "lbf-in", "kip-in")]
        found[k] = (sorted(rows), sets)
    except BaseException as error:
        faults.append(repr(error))
threads = [threading.Thread(target=work, args=(k,)) for k in range(8)]
[t.start() for t in threads]; [t.join() for t in threads]
assert not faults, faults
assert all(f == found[0] for f in found), found
print(len(found))
"""
    assert run(code).strip() == "8"


@pytest.mark.parametrize("text", ["kN", "°C", "Δ°F", "deg", "J", "in-lbf", "MPa√m", "1"])
def test_a_unit_is_the_same_after_pickling(text: str) -> None:
    unit = parse_unit(text)
    again = pickle.loads(pickle.dumps(unit))
    assert again == unit
    assert hash(again) == hash(unit)
    assert (again.text, again.exact, again.offset, again.system) == (unit.text, unit.exact, unit.offset, unit.system)


def test_units_and_dimensions_cannot_be_changed() -> None:
    with pytest.raises(AttributeError):
        parse_unit("kN").scale = 1.0
    with pytest.raises(AttributeError):
        parse_unit("kN").dimension.exponents = ()
    with pytest.raises(ValueError, match="no such base quantity: colour"):
        Dimension.of(colour=1)


@settings(max_examples=60, deadline=None)
@given(units, numbers)
def test_there_and_back_gives_the_number(unit: Unit, value: float) -> None:
    for other in known_units_of(unit.dimension):
        assert convert(convert(value, unit, other), other, unit) == pytest.approx(value, rel=1e-14)


@settings(max_examples=60, deadline=None)
@given(units, units, units)
def test_products_may_be_taken_in_any_order(a: Unit, b: Unit, c: Unit) -> None:
    left, right = (a * b) * c, a * (b * c)
    assert left.dimension == right.dimension == (c * b * a).dimension
    assert left.scale == pytest.approx(right.scale, rel=1e-14)
    assert left.exact == right.exact
    assert (a * b / b).dimension == a.dimension
    assert (a * b / b).scale == pytest.approx(a.scale, rel=1e-14)


@settings(max_examples=60, deadline=None)
@given(units, units, st.integers(-3, 3).filter(bool))
def test_the_text_of_a_unit_built_from_others_reads_back(a: Unit, b: Unit, power: int) -> None:
    for built in (a * b, a / b, a**power, (a * b) ** power, a / (b * b)):
        again = parse_unit(built.text)
        assert again.dimension == built.dimension
        assert again.scale == pytest.approx(built.scale, rel=1e-13)


@settings(max_examples=60, deadline=None)
@given(st.text(max_size=12))
def test_any_text_is_read_or_refused_and_nothing_else(text: str) -> None:
    for reader in (doubler.units.parse_unit, doubler.units.parse_quantity):
        with contextlib.suppress(doubler.units.UnitError):
            reader(text)


@pytest.mark.parametrize(
    ("value", "frm", "to", "expected"),
    [
        (20.0, "°C", "°F", 68.0),
        (-40.0, "°F", "°C", -40.0),
        (0.0, "K", "°C", -273.15),
        (20.0, "Δ°C", "Δ°F", 36.0),
        (20.0, "Δ°C", "K", 20.0),
        (1.0, "in", "mm", 25.4),
        (1.0, "ksi", "MPa", 6.894757293168361),
        (1.0, "lbf", "N", 4.4482216152605),
        (180.0, "deg", "rad", 3.141592653589793),
        (1.0, "µε", "mm/mm", 1e-6),
    ],
)
def test_conversion_gives(value: float, frm: str, to: str, expected: float) -> None:
    assert convert(value, parse_unit(frm), parse_unit(to)) == pytest.approx(expected, rel=1e-14)


def test_unlike_dimensions_are_not_converted() -> None:
    with pytest.raises(doubler.units.UnitError, match=r"MPa \(stress\) cannot be converted to mm \(length\)"):
        convert(1.0, parse_unit("MPa"), parse_unit("mm"))


def test_exact_factors_are_rounded_once() -> None:
    assert factor(parse_unit("ft"), parse_unit("in")) == 12.0
    assert factor(parse_unit("ksi"), parse_unit("psi")) == 1000.0
    assert factor(parse_unit("psi"), parse_unit("MPa")) == float(
        Fraction("4.4482216152605") / Fraction("0.0254") ** 2 / 10**6
    )


@pytest.mark.parametrize("name", CONSISTENT_SETS)
def test_a_set_is_built_once(name: str) -> None:
    assert consistent_set(name) is consistent_set(f" {name} ")


@pytest.mark.parametrize(
    ("text", "name"), [("kN/mm^2", "GPa"), ("N·mm/mm", "N"), ("lbf/in^2", "psi"), ("kip·in^3", None), ("MN/m^2", "MPa")]
)
def test_familiar_name_of_a_unit(text: str, name: str | None) -> None:
    unit = parse_unit(text)
    assert name_for(unit.dimension, unit.scale) == name


@pytest.mark.parametrize(
    ("ratio", "words"),
    [
        (1000.0, "1000 times too large"),
        (1 / 25.4, "25.4 times too small"),
        (1e9, "10^9 times too large"),
        (6.894757293168361, "6.894757 times too large"),
    ],
)
def test_a_factor_is_said_in_words(ratio: float, words: str) -> None:
    assert factor_in_words(ratio) == words
