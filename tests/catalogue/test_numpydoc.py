"""The docstring of every worksheet function is a valid numpydoc one, and says enough to use the function."""

import re

import pytest
from numpydoc.validate import validate

from doubler import mechanics
from doubler.catalogue import lookup, names

mechanics.load()
FUNCTIONS = [function for name in names() if (function := lookup(name)) is not None]
IGNORED = {
    "SA01": "See Also: the list of a category's functions and the reference's links show what stands beside a function",
}
"""What numpydoc asks and is not done here, with the reason."""


def faults(function) -> list[str]:
    kernel = function.kernel
    found = validate(f"{kernel.__module__}.{kernel.__name__}")["errors"]
    arguments = {argument.name: argument for argument in function.arguments}
    return [
        f"{code}: {said}"
        for code, said in found
        if code not in IGNORED
        and not (code == "PR08" and starts_as_it_must(arguments[re.findall(r'"(\w+)"', said)[0]]))
    ]


def starts_as_it_must(argument) -> bool:
    """A coordinate is written x, not X, and a choice as it is typed, also at the start of a sentence."""
    first = re.split(r"[;(:]", argument.description)[0]
    choice = any(first.startswith(word) for word in argument.choices)
    return choice or bool(re.match(r"[a-z][0-9]?\b|:math:", argument.description))


@pytest.mark.parametrize("function", FUNCTIONS, ids=lambda function: function.name)
def test_docstring_is_valid(function) -> None:
    assert not faults(function)


@pytest.mark.parametrize("function", FUNCTIONS, ids=lambda function: function.name)
def test_docstring_says_enough(function) -> None:
    said = function.documentation
    assert said.formula
    assert said.notes, "assumptions and limits belong under Notes"
    assert said.sources
    assert said.example
    assert said.example_result
    assert len(said.summary) <= 110, "one clear line in the list of functions"
    assert re.match(r"[A-Z].*[^.]\.$", said.summary)
    assert list(said.parameters) == [argument.name for argument in function.arguments]
    for argument in function.arguments:
        assert re.search(r"[.)]$", argument.description), argument.name


@pytest.mark.parametrize("function", FUNCTIONS, ids=lambda function: function.name)
def test_docstring_names_each_argument_as_what_it_is(function) -> None:
    for argument in function.arguments:
        written = function.documentation.parameters[argument.name][0]
        if argument.quantity is not None and argument.kind_name != "quantity":
            assert argument.kind_name.split()[0] in written, f"{argument.name} : {written} is a {argument.kind_name}"
