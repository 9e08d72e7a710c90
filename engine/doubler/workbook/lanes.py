"""Values over lanes: one formula's copies and all load cases, side by side in one array.

A *lane* is one copy of a formula in one case. A value over lanes is one of

- a Python scalar (float, text, logical, empty, error): the same in every lane;
- a float64 or bool array, broadcastable to (copies, cases): all lanes hold finite numbers, or all hold
logicals;
- `Mixed`: numbers in most lanes and something else (text, logical, empty, error) in the others.

A `Grid` is a rectangle of cells, each a value over lanes; as one array it has the leading axes (rows,
columns). No NaN and no infinity ever stands for a value: what is no finite number is an error value in its
lane.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator
from typing import Any, TypeAlias

import numpy as np
from numpy.typing import NDArray

from doubler.errors import ErrorValue
from doubler.workbook.model import Scalar

Floats: TypeAlias = NDArray[np.float64]
Slots: TypeAlias = NDArray[np.int32]

NUMBER = -1
"""The slot of a lane that holds a number."""


class Mixed:
    """Lanes that do not all hold numbers.

    Attributes
    ----------
    numbers
        Float64 array; 0 where the lane holds something else.
    slot
        Index into `items` of what the lane holds; -1 for a number. Same shape as `numbers`.
    items
        The distinct things that are not numbers: text, logicals, None for empty, error values.
    """

    __slots__ = ("items", "numbers", "slot")

    def __init__(self, numbers: Floats, slot: Slots, items: list[Any]) -> None:
        self.numbers = numbers
        self.slot = slot
        self.items = items

    @property
    def shape(self) -> tuple[int, ...]:
        """Shape of the lanes (and of the grid, if it is one)."""
        return self.numbers.shape

    def __getitem__(self, index: Any) -> Any:
        """Return a part, as plain as it can be."""
        return plain(self.numbers[index], self.slot[index], self.items)


Array: TypeAlias = "Floats | NDArray[np.bool_] | Mixed"
Lanes: TypeAlias = "Scalar | Array"


class Grid:
    """A rectangle of cells, made of one array with axes (rows, columns, copies, cases) or of a list of cells.

    Attributes
    ----------
    rows, columns
        Size; a whole column or row is cut to what its sheet uses.
    whole
        Size before that cut.
    memo
        What functions worked out about the grid and may need again (an order for searching, say).
    reference
        True where it was read from cells of a sheet, so that text and logicals in it are skipped by sums.
    place
        Row and column of its first cell, where it was read from a rectangle that does not move.
    """

    __slots__ = ("_cells", "_data", "columns", "memo", "place", "reference", "rows", "whole")

    def __init__(
        self,
        rows: int,
        columns: int,
        *,
        data: Array | None = None,
        cells: list[Any] | None = None,
        reference: bool = False,
        whole: tuple[int, int] | None = None,
        place: tuple[int, int] | None = None,
    ) -> None:
        self.rows = rows
        self.columns = columns
        self.reference = reference
        self.whole = whole or (rows, columns)
        self.place = place
        self._data = data
        self._cells = cells
        self.memo: dict[Any, Any] = {}

    @property
    def data(self) -> Array:
        """All cells as one array of shape (rows, columns, copies or 1, cases or 1)."""
        if self._data is None:
            assert self._cells is not None
            self._data = stack(self._cells, self.rows, self.columns)
        return self._data

    @property
    def cells(self) -> list[Any]:
        """The cells row by row, each a value over lanes."""
        if self._cells is None:
            data = self.data
            flat = reshape(data, (self.rows * self.columns, *data.shape[2:]))
            if flat.shape[1:] == (1, 1):
                self._cells = scalars(flat)
            else:
                self._cells = [tidy(flat[index]) for index in range(self.rows * self.columns)]
        return self._cells

    @property
    def lane_constant(self) -> bool:
        """Whether the grid is held as an array that is the same in all lanes."""
        return self._data is not None and self._data.shape[2:] == (1, 1)

    def cell(self, row: int, column: int) -> Any:
        """Return one cell, counted from 0."""
        return self.cells[row * self.columns + column]

    def part(self, row: int, column: int, rows: int, columns: int) -> Grid:
        """Return a rectangle out of this one, its first row and column counted from 0."""
        place = None if self.place is None else (self.place[0] + row, self.place[1] + column)
        if self._cells is None:
            assert self._data is not None
            cut = (slice(row, row + rows), slice(column, column + columns))
            return Grid(rows, columns, data=self._data[cut], reference=self.reference, place=place)
        cells = [
            self._cells[r * self.columns + c] for r in range(row, row + rows) for c in range(column, column + columns)
        ]
        return Grid(rows, columns, cells=cells, reference=self.reference, place=place)

    def lanes_shape(self) -> tuple[int, int]:
        """Return the shape over which its cells vary."""
        if self._data is not None:
            return self._data.shape[2], self._data.shape[3]
        return lanes_shape(self.cells)


def plain(numbers: Any, slot: Any, items: list[Any]) -> Any:
    """Return lanes in the plainest form: a float64 or bool array where all are of one kind, else `Mixed`."""
    if not isinstance(numbers, np.ndarray):
        return float(numbers) if slot == NUMBER else items[slot]
    if not slot.size or slot.max() == NUMBER:
        return numbers
    if slot.min() > NUMBER and all(type(item) is bool for item in items):
        return np.array(items, dtype=np.bool_)[slot]
    return Mixed(numbers, slot, items)


def tidy(value: Any) -> Any:
    """Return a value that is the same in all lanes as a Python scalar; anything else as it is."""
    if isinstance(value, np.ndarray | Mixed) and value.shape == (1, 1):
        return scalars(value)[0]
    return value


def scalars(value: Any) -> list[Any]:
    """Return the lanes of an array, in order, as Python scalars."""
    if isinstance(value, Mixed):
        numbers = value.numbers.ravel().tolist()
        items = value.items
        return [n if s < 0 else items[s] for n, s in zip(numbers, value.slot.ravel().tolist(), strict=True)]
    return list(value.ravel().tolist())


def reshape(value: Array, shape: tuple[int, ...]) -> Array:
    """Return an array in another shape of the same size."""
    if isinstance(value, Mixed):
        return Mixed(value.numbers.reshape(shape), value.slot.reshape(shape), value.items)
    return value.reshape(shape)


def broadcast(value: Any, shape: tuple[int, ...]) -> Array:
    """Return a scalar or array as an array of that shape."""
    if isinstance(value, Mixed):
        return Mixed(np.broadcast_to(value.numbers, shape), np.broadcast_to(value.slot, shape), value.items)
    if isinstance(value, np.ndarray):
        return np.broadcast_to(value, shape)
    if isinstance(value, float):
        return np.broadcast_to(np.float64(value), shape)
    return Mixed(np.zeros(shape), np.zeros(shape, np.int32), [value])


def shape_of(value: Any) -> tuple[int, ...]:
    """Shape of an array; () for a scalar."""
    return value.shape if isinstance(value, np.ndarray | Mixed) else ()


def lanes_shape(values: Iterable[Any]) -> tuple[int, int]:
    """Shape over which scalars, arrays over lanes and grids vary together."""
    copies = cases = 1
    for value in values:
        if isinstance(value, Grid):
            shape: tuple[int, ...] = value.lanes_shape()
        elif isinstance(value, np.ndarray | Mixed):
            shape = value.shape[-2:]
        else:
            continue
        copies = max(copies, shape[0])
        cases = max(cases, shape[1])
    return copies, cases


def from_scalars(values: list[Any], shape: tuple[int, ...]) -> Any:
    """Build lanes from Python scalars in order: a scalar for shape (), else the plainest array of that shape."""
    if shape == ():
        return values[0]
    numbers = np.zeros(len(values))
    slot: Slots | None = None
    items: list[Any] = []
    index: dict[Any, int] = {}
    if set(map(type, values)) == {float}:
        numbers[:] = values
        return numbers.reshape(shape)
    slot = np.full(len(values), NUMBER, np.int32)
    for at, value in enumerate(values):
        if type(value) is float:
            numbers[at] = value
        else:
            key = (type(value), value)
            found = index.get(key)
            if found is None:
                found = index[key] = len(items)
                items.append(value)
            slot[at] = found
    return plain(numbers.reshape(shape), slot.reshape(shape), items)


def as_mixed(value: Any) -> Mixed:
    """Return any array as `Mixed`."""
    if isinstance(value, Mixed):
        return value
    if value.dtype == np.bool_:
        return Mixed(np.zeros(value.shape), value.astype(np.int32), [False, True])
    return Mixed(value, np.full(value.shape, NUMBER, np.int32), [])


def concatenated(parts: list[Any], axis: int) -> Array:
    """Join arrays along an axis, in the plainest form; their other axes must agree."""
    if all(isinstance(part, np.ndarray) and part.dtype == np.float64 for part in parts):
        return np.concatenate(parts, axis)
    mixed = [as_mixed(part) for part in parts]
    items: list[Any] = []
    slots = []
    for part in mixed:
        slots.append(np.where(part.slot >= 0, part.slot + len(items), NUMBER))
        items += part.items
    numbers = np.concatenate([part.numbers for part in mixed], axis)
    result: Array = plain(numbers, np.concatenate(slots, axis).astype(np.int32), items)
    return result


def stack(cells: list[Any], rows: int, columns: int) -> Array:
    """Build a grid's array from its cells."""
    copies, cases = lanes_shape(cells)
    if (copies, cases) == (1, 1):
        flat = [tidy(cell) for cell in cells]
        result: Array = from_scalars(flat, (rows, columns, 1, 1))
        return result
    if all(isinstance(cell, float) or (isinstance(cell, np.ndarray) and cell.dtype == np.float64) for cell in cells):
        out = np.empty((rows * columns, copies, cases))
        for index, cell in enumerate(cells):
            out[index] = cell
        return out.reshape(rows, columns, copies, cases)
    parts = [reshape(broadcast(cell, (copies, cases)), (1, copies, cases)) for cell in cells]
    return reshape(concatenated(parts, 0), (rows, columns, copies, cases))


def select(mask: NDArray[np.bool_], yes: Any, no: Any) -> Any:
    """Return `yes` in the lanes where the mask is true, `no` in the others."""
    plain_yes = isinstance(yes, float) or (isinstance(yes, np.ndarray) and yes.dtype == np.float64)
    plain_no = isinstance(no, float) or (isinstance(no, np.ndarray) and no.dtype == np.float64)
    if plain_yes and plain_no:
        return np.where(mask, yes, no)
    shape = np.broadcast_shapes(mask.shape, shape_of(yes), shape_of(no))
    a, b = as_mixed(broadcast(yes, shape)), as_mixed(broadcast(no, shape))
    numbers = np.where(mask, a.numbers, b.numbers)
    slot = np.where(mask, a.slot, np.where(b.slot >= 0, b.slot + len(a.items), NUMBER)).astype(np.int32)
    return compact(numbers, slot, a.items + b.items)


def compact(numbers: Floats, slot: Slots, items: list[Any]) -> Any:
    """Return lanes in the plainest form, the items that no lane holds left out."""
    used = np.unique(slot)
    used = used[used >= 0]
    if not used.size:
        return numbers
    kept: list[Any] = []
    seen: dict[Any, int] = {}
    renumber = np.full(len(items) + 1, NUMBER, np.int32)
    for index in used.tolist():
        item = items[index]
        key = (type(item), item)
        if key not in seen:
            seen[key] = len(kept)
            kept.append(item)
        renumber[index] = seen[key]
    return plain(numbers, renumber[slot], kept)


def each_lane(arguments: list[Any], shape: tuple[int, ...]) -> Iterator[list[Any]]:
    """Yield the arguments lane by lane as Python scalars; the shape is the broadcast one."""
    columns = []
    count = int(np.prod(shape)) if shape else 1
    for argument in arguments:
        if isinstance(argument, np.ndarray | Mixed):
            columns.append(scalars(broadcast(argument, shape)))
        else:
            columns.append([argument] * count)
    for lane in zip(*columns, strict=True):
        yield list(lane)


def lane_by_lane(rule: Callable[..., Any], arguments: list[Any]) -> Any:
    """Apply a rule on Python scalars in every lane."""
    shape = np.broadcast_shapes(*(shape_of(argument) for argument in arguments)) if arguments else ()
    if shape == ():
        return rule(*arguments)
    return from_scalars([rule(*lane) for lane in each_lane(arguments, shape)], shape)


def filled(value: Any) -> Any:
    """Let empty lanes be 0, as a cell that takes over an empty one shows them."""
    if value is None:
        return 0.0
    if not isinstance(value, Mixed) or None not in value.items:
        return value
    empty = np.array([item is None for item in value.items])[value.slot] & (value.slot >= 0)
    return plain(value.numbers, np.where(empty, NUMBER, value.slot).astype(np.int32), value.items)


def is_error(value: Any) -> bool:
    """Whether a scalar is an error value."""
    return isinstance(value, ErrorValue)
