"""The declaration of a worksheet function, and the record that is read from it.

From the record come the Python call, the worksheet function of every host, the units rule of the checker, the reference
page and the table of check values.
"""

from __future__ import annotations

import importlib
import inspect
import types
import typing
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from functools import cached_property
from typing import Any

from doubler.catalogue.annotations import Alike, Entries, Quantity, Row, Square, Words
from doubler.catalogue.docstring import Documentation, read
from doubler.catalogue.limits import Condition, Limit

CATEGORIES = {
    "STRESS": "stresses in bars, beams, shells and contacts, and their combination",
    "STRAIN": "strains, strain gauges, and strain to stress and back",
    "MODULUS": "elastic constants and their conversion and consistency",
    "CURVE": "stress-strain curves and what a test curve gives",
    "SECTION": "section properties",
    "STIFFNESS": "stiffness, deflection and frequency",
    "BUCKLING": "stability",
    "PLY": "plies and laminates",
    "MARGIN": "margins of safety, factors and interaction",
    "UNIT": "units and tables",
}
"""The first word of a worksheet function's name, and what stands under it."""


@dataclass(frozen=True, slots=True)
class Argument:
    """One argument of a worksheet function.

    Attributes
    ----------
    name
        Name in the Python call and in every host.
    quantity
        Its `Quantity`, `Alike`, or None for text.
    entries
        True where the argument is a whole column, its entries on the last axis.
    choices
        The texts allowed, for a choice; else empty.
    optional, default
        Whether it may be left out, and what then holds.
    limit
        Its limit of validity, or None.
    description
        From the docstring.
    """

    name: str
    quantity: Quantity | Alike | None
    entries: bool
    choices: tuple[str, ...]
    optional: bool
    default: Any
    limit: Limit | None
    description: str

    @property
    def is_text(self) -> bool:
        """Whether the argument is text: a choice, a name, or a column of names."""
        return self.quantity is None

    @property
    def kind_name(self) -> str:
        """What the argument is, in one or two words, for lists and messages."""
        if self.choices:
            return "choice"
        if self.quantity is None:
            return "text"
        if isinstance(self.quantity, Alike):
            return "quantity"
        return self.quantity.kind.replace("_", " ")


@dataclass(frozen=True, slots=True)
class Result:
    """The result of a worksheet function: its quantity (None for text), and its shape a lane."""

    name: str
    quantity: Quantity | Alike | None
    names: tuple[str, ...]
    size: int
    description: str

    @property
    def extra_axes(self) -> int:
        """How many axes one lane's result has: 0 for a number, 1 for a row, 2 for a matrix."""
        return 1 if self.names else 2 if self.size else 0

    @property
    def kind_name(self) -> str:
        """What the result is, in one or two words."""
        if self.quantity is None:
            return "text"
        if isinstance(self.quantity, Alike):
            return "quantity"
        return self.quantity.kind.replace("_", " ")


class WorksheetFunction:
    """A formula of the trade, declared once.

    Calling it with numbers or arrays in consistent units, or with pint quantities, gives the result in the same form,
    after its limits of validity were checked. `kernel` is the bare NumPy expression.

    Attributes
    ----------
    name
        The worksheet name, CATEGORY_THING.
    kernel
        The NumPy kernel: consistent units in, consistent units out, nothing checked.
    arguments, result
        Read from the kernel's signature and docstring.
    conditions
        Limits between arguments.
    readings
        How calls whose arguments are all text were read, so that a sheet's next recalculation need not read them again.
    """

    def __init__(
        self,
        name: str,
        kernel: Callable[..., Any],
        valid: Mapping[str, Limit],
        conditions: Sequence[Condition],
    ) -> None:
        self.name = name
        self.kernel = kernel
        self.conditions = tuple(conditions)
        self._valid = dict(valid)
        self.__name__ = kernel.__name__
        self.__doc__ = kernel.__doc__
        self.__module__ = kernel.__module__
        self.__wrapped__ = kernel
        self.readings: dict[tuple[str, ...], Any] = {}

    def __reduce__(self) -> tuple[Any, ...]:
        return _restored, (self.__module__, self.name)

    @property
    def category(self) -> str:
        """The first word of the name."""
        return self.name.split("_", 1)[0]

    @cached_property
    def documentation(self) -> Documentation:
        """The docstring, taken apart."""
        return read(self.kernel)

    @cached_property
    def arguments(self) -> tuple[Argument, ...]:
        """The declared arguments, in order, without the closing optional `result` argument."""
        hints = typing.get_type_hints(self.kernel, include_extras=True)
        described = self.documentation.parameters
        return tuple(
            self._argument(parameter, hints[name], described.get(name, ("", ""))[1])
            for name, parameter in inspect.signature(self.kernel).parameters.items()
        )

    def _argument(self, parameter: inspect.Parameter, hint: Any, description: str) -> Argument:
        choices: tuple[str, ...] = ()
        if typing.get_origin(hint) in (typing.Union, types.UnionType):
            hint = next(part for part in typing.get_args(hint) if part is not type(None))
        marks: tuple[Any, ...] = getattr(hint, "__metadata__", ())
        if typing.get_origin(hint) is typing.Literal:
            choices = typing.get_args(hint)
        elif not marks:
            raise TypeError(f"{self.name}: argument {parameter.name} is annotated with no quantity, text or choice")
        return Argument(
            name=parameter.name,
            quantity=next((mark for mark in marks if isinstance(mark, Quantity | Alike)), None),
            entries=any(isinstance(mark, Entries) for mark in marks),
            choices=choices,
            optional=parameter.default is not parameter.empty,
            default=None if parameter.default is parameter.empty else parameter.default,
            limit=self._valid.get(parameter.name),
            description=description,
        )

    @cached_property
    def result(self) -> Result:
        """The declared result."""
        marks: tuple[Any, ...] = typing.get_type_hints(self.kernel, include_extras=True)["return"].__metadata__
        name, _, description = self.documentation.returns
        rows = next((mark for mark in marks if isinstance(mark, Row)), None)
        square = next((mark for mark in marks if isinstance(mark, Square)), None)
        return Result(
            name=name,
            quantity=next((mark for mark in marks if isinstance(mark, Quantity | Alike)), None),
            names=rows.names if rows else (),
            size=square.size if square else 0,
            description=description,
        )

    def check_declaration(self) -> None:
        """Raise TypeError or KeyError where the declaration does not hold together; the tests run it for all."""
        from doubler.units import KINDS

        if self.category not in CATEGORIES or not self.name.isupper():
            raise TypeError(f"{self.name}: a worksheet name is CATEGORY_THING in capitals")
        names = {argument.name for argument in self.arguments}
        marks = [(a.name, a.quantity, a.is_text) for a in self.arguments]
        for name, quantity, is_text in [*marks, ("result", self.result.quantity, self._returns_text())]:
            if isinstance(quantity, Quantity):
                KINDS[quantity.kind]
            elif quantity is None and not is_text:
                raise TypeError(f"{self.name}: {name} has no quantity")
        loose = set(self._valid) - names | {n for c in self.conditions for n in c.names} - names
        if loose:
            raise TypeError(f"{self.name}: limits are declared for unknown arguments {sorted(loose)}")

    def _returns_text(self) -> bool:
        marks = typing.get_type_hints(self.kernel, include_extras=True)["return"].__metadata__
        return any(isinstance(mark, Words) for mark in marks)

    def __call__(self, *positional: Any, **named: Any) -> Any:
        """Evaluate with numbers or arrays in consistent units, or with pint quantities; see the class."""
        from doubler.catalogue.python_call import call

        return call(self, positional, named)

    def __repr__(self) -> str:
        return f"<worksheet function {self.name}>"


def _restored(module: str, name: str) -> WorksheetFunction:
    """Find a function that was pickled: it is declared anew where it is not yet, never copied."""
    if name not in _REGISTERED:
        importlib.import_module(module)
    return _REGISTERED[name]


_REGISTERED: dict[str, WorksheetFunction] = {}


def worksheet_function(
    name: str, *, valid: Mapping[str, Limit] | None = None, conditions: Sequence[Condition] = ()
) -> Callable[[Callable[..., Any]], WorksheetFunction]:
    """Declare a NumPy kernel as the worksheet function `name`.

    Parameters
    ----------
    name : str
        CATEGORY_THING in capitals.
    valid : mapping of argument name to Limit, optional
        The range of each argument outside of which there is no result.
    conditions : sequence of Condition, optional
        Limits between arguments.

    Returns
    -------
    callable
        The decorator; what it gives is the `WorksheetFunction`.
    """

    def declare(kernel: Callable[..., Any]) -> WorksheetFunction:
        if name in _REGISTERED:
            raise TypeError(f"{name} is declared twice")
        _check_names(name, kernel, valid or {}, conditions)
        function = WorksheetFunction(name, kernel, valid or {}, conditions)
        _REGISTERED[name] = function
        return function

    return declare


def _check_names(
    name: str, kernel: Callable[..., Any], valid: Mapping[str, Limit], conditions: Sequence[Condition]
) -> None:
    """Refuse at once what can be seen without reading annotations or docstrings; `check_declaration` sees the rest."""
    category, _, thing = name.partition("_")
    if category not in CATEGORIES or not thing or not name.isupper() or not name.isascii():
        raise TypeError(
            f"{name}: a worksheet name is CATEGORY_THING in capitals; categories are {', '.join(CATEGORIES)}"
        )
    known = kernel.__code__.co_varnames[: kernel.__code__.co_argcount]
    loose = [n for n in (*valid, *(n for rule in conditions for n in rule.names)) if n not in known]
    if loose:
        raise TypeError(f"{name}: limits are declared for unknown arguments {', '.join(sorted(set(loose)))}")


def lookup(name: str) -> WorksheetFunction | None:
    """Return the worksheet function of that name, in any case, or None."""
    return _REGISTERED.get(name.upper())


def names() -> list[str]:
    """Return the names of all declared worksheet functions, in order of category and name."""
    order = list(CATEGORIES)
    return sorted(_REGISTERED, key=lambda name: (order.index(name.split("_", 1)[0]), name))
