"""Plane stress states that a sheet holds: two normal stresses and the shear between them, found by their words."""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass
from functools import lru_cache
from math import degrees, isfinite

from doubler.mechanics import criteria, plane_stress
from doubler.units import Unit, kind
from doubler.workbook.addresses import cell_name
from doubler.workbook.examined import Examined, Key, cell_name_of

FARTHEST = 6
"""Rows within which the three numbers of one state stand below each other."""

_LETTERS = r"(?:σ|Σ|sigma|sig|S|s|f)"
_SHEARS = r"(?:τ|tau|σ|sigma|sig|S|s|f)"
_ENDS = r"(?=$|[\s),=:;\[(])"
_BEGINS = r"(?:^|[\s(,=:;])"
_SYMBOLS = {
    "xy": re.compile(rf"{_BEGINS}{_SHEARS}[_\s]?\{{?(?:xy|yx)\}}?{_ENDS}"),
    "x": re.compile(rf"{_BEGINS}(?:{_LETTERS}_\{{?|σ|S|s|f)(?:x|xx)\}}?{_ENDS}"),
    "y": re.compile(rf"{_BEGINS}(?:{_LETTERS}_\{{?|σ|S|s|f)(?:y|yy)\}}?{_ENDS}"),
}
_WORDS = {
    "xy": re.compile(
        r"\b(?:shear(?:ing)?[- ]stress(?:es)?,?\s*(?:in\s+(?:the\s+)?)?\(?(?:xy|yx|x-y)\b|in-plane shear stress\b)",
        re.I,
    ),
    "x": re.compile(r"\b(?:stress(?:es)?,?\s*(?:in|along)?\s*(?:the\s+)?\(?x\b|x[- ](?:normal )?stress\b)", re.I),
    "y": re.compile(r"\b(?:stress(?:es)?,?\s*(?:in|along)?\s*(?:the\s+)?\(?y\b|y[- ](?:normal )?stress\b)", re.I),
}
_OTHER = re.compile(
    r"\b(?:allowables?|strength|ultimate|proof|permissible|yield|limit of|modulus|factor|ratio|range|error)\b", re.I
)


@dataclass(frozen=True, slots=True)
class PlaneState:
    """One plane stress state, all stresses in one unit; tension positive, angles counter-clockwise.

    Attributes
    ----------
    cells
        The cells of σx, σy and τxy.
    unit, scale
        The unit of all stresses, and its factor to Pa, by which states in unlike units are compared.
    sigma_x, sigma_y, tau_xy
        The stresses.
    sigma_1, sigma_2, shear_in_plane, von_mises
        Principal stresses of the plane, largest shear in the plane, equivalent stress.
    angle
        From the x axis to the direction of σ1, in degrees; None where all directions are alike.
    """

    cells: tuple[Key, Key, Key]
    unit: str
    scale: float
    sigma_x: float
    sigma_y: float
    tau_xy: float
    sigma_1: float
    sigma_2: float
    shear_in_plane: float
    von_mises: float
    angle: float | None

    @property
    def places(self) -> str:
        """Its three cells, the sheet said once."""
        return ", ".join([cell_name_of(self.cells[0]), *(cell_name(*address) for _, address in self.cells[1:])])

    @property
    def sheet(self) -> str:
        """The sheet on which it stands."""
        return self.cells[0][0]

    @property
    def largest_shear(self) -> float:
        """The largest shear of all planes, the stress across the part being zero."""
        return max(abs(self.sigma_1), abs(self.sigma_2), self.sigma_1 - self.sigma_2) / 2

    def as_object(self) -> dict[str, object]:
        """Return it for JSON."""
        return {
            "cells": [cell_name_of(key) for key in self.cells],
            "unit": self.unit,
            "sigma_x": self.sigma_x,
            "sigma_y": self.sigma_y,
            "tau_xy": self.tau_xy,
            "sigma_1": self.sigma_1,
            "sigma_2": self.sigma_2,
            "shear_in_plane": self.shear_in_plane,
            "largest_shear": self.largest_shear,
            "von_mises": self.von_mises,
            "angle_degrees": self.angle,
        }


def state_of(sigma_x: float, sigma_y: float, tau_xy: float, unit: Unit, cells: tuple[Key, Key, Key]) -> PlaneState:
    """Work out a state from its three stresses."""
    given = (sigma_x, sigma_y, tau_xy)
    alike = sigma_x == sigma_y and tau_xy == 0.0
    return PlaneState(
        cells,
        unit.text,
        unit.scale,
        *given,
        float(plane_stress.principal_max(*given)),
        float(plane_stress.principal_min(*given)),
        float(plane_stress.shear_max_in_plane(*given)),
        float(criteria.von_mises(*given)),
        None if alike else degrees(float(plane_stress.principal_angle(*given))),
    )


def plane_states(book: Examined) -> list[PlaneState]:
    """Return the plane stress states of a workbook, sheet by sheet, in the order in which they stand."""
    stress = kind("stress").dimension
    found: list[PlaneState] = []
    for sheet in book.workbook.sheets:
        parts: dict[tuple[int, int], str] = {}
        for address in sorted(sheet.cells):
            key = (sheet.name, address)
            if sheet.cells[address].formula is None and not isinstance(sheet.cells[address].value, float):
                continue
            declared = book.declarations.unit(*key)
            if declared is None or declared.unit.dimension != stress:
                continue
            label = book.label(key)
            part = next((p for words in _texts(label.left, label.above, label.name) if (p := part_of(words))), None)
            if part is not None:
                parts[address] = part
        for cells in _together(parts):
            state = _state(book, tuple((sheet.name, address) for address in cells))
            if state is not None:
                found.append(state)
    return found


def _texts(left: tuple[str, ...], above: tuple[str, ...], name: str) -> Iterator[str]:
    yield from dict.fromkeys((" ".join(left), *above[:2], name))


@lru_cache(maxsize=16384)
def part_of(words: str) -> str | None:
    """Return which of the three stresses words mean: ``x``, ``y`` or ``xy``; None for none or for more than one.

    Examples
    --------
    >>> part_of("Normal stress σ_x [MPa]"), part_of("τxy"), part_of("Stress in y"), part_of("sigma max")
    ('x', 'xy', 'y', None)
    """
    if not words or _OTHER.search(words):
        return None
    for patterns in (_SYMBOLS, _WORDS):
        parts = [name for name, pattern in patterns.items() if pattern.search(words)]
        if parts:
            return parts[0] if len(parts) == 1 else None
    return None


def _together(parts: dict[tuple[int, int], str]) -> Iterator[tuple[tuple[int, int], ...]]:
    """Yield the cells of σx, σy and τxy that belong together: in one row, or below each other in one column."""
    used: set[tuple[int, int]] = set()
    rows: dict[int, dict[str, list[tuple[int, int]]]] = {}
    for address, part in parts.items():
        rows.setdefault(address[0], {}).setdefault(part, []).append(address)
    for row in sorted(rows):
        held = rows[row]
        if held.keys() >= {"x", "y", "xy"}:
            for three in zip(held["x"], held["y"], held["xy"], strict=False):
                used.update(three)
                yield three
    for address, part in parts.items():
        if part != "x" or address in used:
            continue
        row, column = address
        near: dict[str, tuple[int, int]] = {}
        for other in sorted(parts, key=lambda at: abs(at[0] - row)):
            if other[1] == column and other not in used and parts[other] != "x" and abs(other[0] - row) <= FARTHEST:
                near.setdefault(parts[other], other)
        if near.keys() == {"y", "xy"}:
            three = (address, near["y"], near["xy"])
            used.update(three)
            yield three


def _state(book: Examined, cells: tuple[Key, ...]) -> PlaneState | None:
    numbers = []
    unit = None
    for key in cells:
        declared, value = book.declarations.unit(*key), book.number(key)
        if declared is None or value is None or not isfinite(value):
            return None
        unit = unit or declared.unit
        numbers.append(value * declared.unit.scale / unit.scale)
    assert unit is not None
    x, y, xy = numbers
    return state_of(x, y, xy, unit, (cells[0], cells[1], cells[2]))
