"""Every formula holds in every consistent set: a kernel gives the same physical result whatever set it computes in.

The units of a call choose the set of its kernel (US customary inputs: lbf and inch; long arrays: forces in kN). A
kernel with a number in it that secretly has a unit would then give another result.
"""

from typing import Any

import numpy as np
import pytest
from formualizer import parse

from doubler import mechanics
from doubler.catalogue import cells, lookup, names
from doubler.catalogue.evaluation import evaluate
from doubler.catalogue.formula_text import _literal
from doubler.catalogue.plan import Plan, plan_for
from doubler.units import ConsistentSet, factor

mechanics.load()
SETS = [
    ConsistentSet("kN-mm", "mm", "kN", "K"),
    ConsistentSet("MN-mm", "mm", "MN", "K"),
    ConsistentSet("N-m", "m", "N", "K"),
    ConsistentSet("lbf-in", "in", "lbf", "Δ°F"),
    ConsistentSet("kip-in", "in", "kip", "Δ°F"),
]


def in_set(plan: Plan, chosen: ConsistentSet) -> Plan:
    """Return the plan with its kernel computing in another set."""
    factors, offsets = [], []
    for unit, offset in zip(plan.units, plan.offsets, strict=True):
        own = None if unit is None else chosen.unit_for(unit.dimension)
        factors.append(None if unit is None or own is None else factor(unit, own))
        offsets.append(0.0 if own is None or not offset or unit is None else unit.offset / own.scale)
    result = plan.result_unit
    scale = 1.0 if result is None else factor(chosen.unit_for(result.dimension), result)
    return Plan(tuple(factors), tuple(offsets), plan.units, scale, plan.result_offset, result)


@pytest.mark.parametrize("name", names())
def test_the_example_gives_the_same_in_every_set(name: str) -> None:
    function = lookup(name)
    assert function is not None
    tree: dict[str, Any] = parse(function.documentation.example).to_dict()
    if tree["node_type"] != "Function" or tree["name"].upper() != name:
        pytest.skip("the example is no plain call of the function")
    bound, wanted = cells.bind_all(function, [_literal(argument) for argument in tree["args"]])
    plan = plan_for(function, tuple(item.unit for item in bound), wanted)
    values = [item.values for item in bound]
    expected = evaluate(function, plan, values).values
    if expected.dtype == object:
        for chosen in SETS:
            assert (evaluate(function, in_set(plan, chosen), values).values == expected).all()
        return
    assert np.isfinite(expected).all()
    largest = float(np.abs(expected).max())
    for chosen in SETS:
        found = evaluate(function, in_set(plan, chosen), values).values
        np.testing.assert_allclose(found, expected, rtol=1e-8, atol=1e-9 * largest, err_msg=repr(chosen))
