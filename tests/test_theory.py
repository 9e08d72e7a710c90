"""The theory pages and their sketches agree with the functions."""

import importlib.util
import re
import sys
from pathlib import Path
from types import ModuleType

import numpy as np
import pytest

from doubler import catalogue, mechanics
from doubler.mechanics import curve_ramberg_osgood, curve_strength, moduli_pairs, outline, plane_stress

DOCS = Path(__file__).parent.parent / "docs"
PAGES = sorted((DOCS / "theory").glob("*.md"))
FENCE = r"```math\n(.*?)\n```\n"
STATED = [
    pytest.param(name, "\n".join(re.findall(FENCE, fences)), id=f"{page.stem}:{name}")
    for page in PAGES
    for name, fences in re.findall(
        rf"<!-- formula of ([A-Z0-9_]+) -->\n((?:{FENCE.replace('(', '(?:')}\n?)+)", page.read_text(encoding="utf-8")
    )
]


def script(name: str) -> ModuleType:
    spec = importlib.util.spec_from_file_location(name, DOCS / f"{name}.py")
    assert spec is not None
    assert spec.loader is not None
    module = importlib.util.module_from_spec(spec)
    sys.modules[name] = module
    spec.loader.exec_module(module)
    return module


@pytest.fixture(scope="module")
def sketches() -> ModuleType:
    return script("make_sketches")


@pytest.fixture(scope="module")
def section_sketches(sketches: ModuleType) -> ModuleType:
    """The other script takes its colours from the first."""
    del sketches
    return script("make_section_sketches")


@pytest.mark.parametrize(("name", "formula"), STATED)
def test_a_page_states_the_formula_of_the_function(name: str, formula: str) -> None:
    mechanics.load()
    function = catalogue.lookup(name)
    assert function is not None
    assert formula == function.documentation.formula, f"docs/theory states another formula of {name}; copy its own"


def test_every_topic_has_formulas_sketches_limits_and_sources() -> None:
    topics = [page for page in PAGES if page.name != "README.md"]
    assert len(topics) >= 3
    index = (DOCS / "theory" / "README.md").read_text(encoding="utf-8")
    for page in topics:
        text = page.read_text(encoding="utf-8")
        assert "## What is assumed" in text
        assert "## Sources" in text
        assert "```math" in text
        assert "../images/sketch_" in text
        assert f"({page.name})" in index


def test_every_sketch_is_drawn_and_stored_as_the_script_draws_it(
    sketches: ModuleType, section_sketches: ModuleType, tmp_path: Path
) -> None:
    drawn = {path.name for made in (sketches, section_sketches) for path in made.draw_all(tmp_path)}
    stored = {path.name for path in (DOCS / "images").glob("sketch_*.svg")}
    assert drawn == stored
    assert all((tmp_path / name).stat().st_size > 2000 for name in drawn)
    assert not list(tmp_path.glob(".*"))
    shown = set(
        re.findall(r"images/(sketch_\w+\.svg)", "".join(p.read_text(encoding="utf-8") for p in DOCS.rglob("*.md")))
    )
    assert shown == stored


def test_mohrs_circle_is_drawn_where_the_functions_put_it(sketches: ModuleType) -> None:
    centre, radius, angle = sketches.mohr()
    assert plane_stress.principal_max(*sketches.STATE) == pytest.approx(centre + radius, rel=1e-12)
    assert plane_stress.principal_min(*sketches.STATE) == pytest.approx(centre - radius, rel=1e-12)
    assert np.degrees(plane_stress.principal_angle(*sketches.STATE)) == pytest.approx(angle, rel=1e-12)


def test_the_curve_is_drawn_where_the_functions_put_it(sketches: ModuleType) -> None:
    e, proof, exponent, toe = sketches.MODULUS, sketches.PROOF, sketches.EXPONENT, sketches.TOE
    stress = np.linspace(0.0, 340.0, 8)
    assert curve_ramberg_osgood.strain(stress, e, proof, exponent) == pytest.approx(
        sketches.strain_of(stress), rel=1e-12
    )
    found = curve_strength.proof_stress(*sketches.record_with_toe(), 0.002, 75.0, 130.0)
    assert found == pytest.approx(proof, rel=0.01)
    assert toe > 0.0


def test_moduli_are_drawn_where_the_functions_put_them() -> None:
    state = moduli_pairs.solve([1.0, 0.3, None, None, None, None], None)
    drawn = (1.0 / 2.6, 1.0 / 1.2, 0.3 / (1.3 * 0.4))
    assert [float(moduli_pairs.value_of(name, state)) for name in ("shear", "bulk", "lame")] == pytest.approx(drawn)


def test_centroids_are_drawn_where_the_functions_put_them(sketches: ModuleType) -> None:
    for name, rings in sketches.outlines().items():
        loops = [outline.closed(*np.transpose(np.asarray(ring, dtype=float))) for ring in rings]
        whole = loops[0] if len(loops) == 1 else outline.without(*loops)
        assert sketches.centroid(rings) == pytest.approx([float(c) for c in outline.centroid(whole)], abs=1e-9), name


def test_the_sketched_column_curve_and_interaction_are_those_of_the_functions(section_sketches: ModuleType) -> None:
    mechanics.load()
    column, pair = catalogue.lookup("BUCKLING_COLUMN_STRESS"), catalogue.lookup("MARGIN_BOLT_COMBINED")
    assert column is not None
    assert pair is not None
    curves = section_sketches.column_curve().axes[0].lines[:2]
    for line in curves:
        slenderness, stress = np.asarray(line.get_xdata()), np.asarray(line.get_ydata())
        assert np.allclose(column(slenderness, 70e3, 300.0), stress, rtol=1e-9)
    ray = section_sketches.interaction().axes[0].lines
    low, high = np.ravel(ray[2].get_data()), np.ravel(ray[3].get_data())
    assert np.allclose(high / low, 1.0 + pair(low[0], low[1], 1.0, 1.0, 1.0, "exponents 2 and 3"), rtol=1e-6)
