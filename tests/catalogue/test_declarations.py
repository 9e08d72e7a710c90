"""What holds for every declared function."""

import inspect

import pytest

from doubler import mechanics
from doubler.catalogue import CATEGORIES, lookup, names

mechanics.load()
FUNCTIONS = [function for name in names() if (function := lookup(name)) is not None]


@pytest.mark.parametrize("function", FUNCTIONS, ids=lambda function: function.name)
def test_declaration_holds_together(function) -> None:
    function.check_declaration()
    assert function.category in CATEGORIES


@pytest.mark.parametrize("function", FUNCTIONS, ids=lambda function: function.name)
def test_docstring_agrees_with_signature(function) -> None:
    documentation = function.documentation
    assert list(documentation.parameters) == list(inspect.signature(function.kernel).parameters)
    assert documentation.summary.endswith(".")
    assert len(documentation.summary) <= 120
    assert documentation.formula, "the formula is missing"
    assert documentation.notes, "assumptions and limits are missing"
    assert documentation.sources, "the source is missing"
    assert documentation.example, "the example is missing"
    assert documentation.returns[2], "the result is not described"
    for argument in function.arguments:
        assert argument.description, f"{argument.name} is not described"


@pytest.mark.parametrize("function", FUNCTIONS, ids=lambda function: function.name)
def test_fits_every_host(function) -> None:
    assert len(function.arguments) <= 14
    assert len(function.name) <= 40
    assert function.name.replace("_", "").isalnum()


def test_every_example_calls_its_own_function() -> None:
    wrong = [f.name for f in FUNCTIONS if f.name + "(" not in f.documentation.example]
    assert not wrong
