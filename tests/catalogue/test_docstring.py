"""What is read from a function's docstring."""

from doubler.catalogue.docstring import read


def broken_over_lines() -> None:
    """Give one.

    Examples
    --------
    >>> cell('=A({1;2}, '
    ...      '"N-mm")')
    [[1.0]]
    >>> cell('=B(1)')
    2.0
    """


def test_an_example_may_go_over_several_lines() -> None:
    found = read(broken_over_lines)
    assert found.example == '=A({1;2}, "N-mm")'
    assert found.example_result == "[[1.0]]"
