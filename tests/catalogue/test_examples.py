"""Every example in the docstring of a worksheet function is run, topic by topic."""

import doctest
import importlib

import pytest

from doubler import mechanics
from doubler.catalogue import lookup, names
from doubler.catalogue.formula_text import cell

TOPICS = mechanics.load()
FUNCTIONS = [function for name in names() if (function := lookup(name)) is not None]


def run(name: str, text: str) -> str:
    """Run the examples in a docstring, and return what differs."""
    test = doctest.DocTestParser().get_doctest(text, {"cell": cell}, name, None, None)
    report: list[str] = []
    doctest.DocTestRunner(verbose=False, optionflags=doctest.NORMALIZE_WHITESPACE).run(test, out=report.append)
    return "".join(report)


@pytest.mark.parametrize("topic", TOPICS)
def test_examples_give_what_they_say(topic: str) -> None:
    module = importlib.import_module(f"doubler.mechanics.{topic}")
    of_topic = [function for function in FUNCTIONS if function.kernel.__module__ == module.__name__]
    assert not "".join(run(function.name, function.kernel.__doc__ or "") for function in of_topic)
    plain = [test for test in doctest.DocTestFinder().find(module) if test.examples and "cell(" not in test.docstring]
    for test in plain:
        assert doctest.DocTestRunner(verbose=False).run(test).failed == 0, test.name
