"""Allowables from the user's own table, by material, basis and temperature, with the row that was read."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Temperature, Text, Values, X, column
from doubler.catalogue.limits import Refusal, condition
from doubler.mechanics.table_rows import aligned, same_text

TextColumn: Any = column(Text)
TemperatureColumn: Any = column(Temperature)
XColumn: Any = column(X)

_SLACK = 1e-9
"""What rounding may add to a temperature, as a share of it on the absolute scale."""


def _rows(
    material: str,
    basis: str,
    table_material: Sequence[str],
    table_basis: Sequence[str],
    table_temperature: Values,
) -> tuple[Values, Values]:
    """Return the rows of one material and basis by rising temperature, and their temperatures.

    Raises
    ------
    Refusal
        None is there, two stand at one temperature, or the table differs from case to case.
    """
    count = table_temperature.shape[-1]
    materials = aligned(table_material, count, "table_material")
    bases = aligned(table_basis, count, "table_basis")
    if np.any(table_temperature != table_temperature[:1]):
        raise Refusal("the table must be the same in all cases")
    of_material = [i for i in range(count) if same_text(materials[i], material)]
    if not of_material:
        raise Refusal(f"the table has no material {material!r}; it has {_listed(materials)}")
    found = np.array([i for i in of_material if same_text(bases[i], basis)], dtype=np.intp)
    if not found.size:
        raise Refusal(
            f"the table has no basis {basis!r} of {material}; it has {_listed([bases[i] for i in of_material])}"
        )
    temperatures = table_temperature[0][found]
    order = np.argsort(temperatures, kind="stable")
    found, temperatures = found[order], temperatures[order]
    twice = np.flatnonzero(np.diff(temperatures) <= _SLACK * np.abs(temperatures[1:]))
    if twice.size:
        first, second = sorted((found[twice[0]] + 1, found[twice[0] + 1] + 1))
        raise Refusal(
            f"rows {first} and {second} of the table are both {material}, {basis} at one temperature; keep one"
        )
    return found, temperatures


def _listed(names: Sequence[str]) -> str:
    return ", ".join(dict.fromkeys(name or "an empty cell" for name in names))


def _covers(
    material: str,
    basis: str,
    temperature: Values,
    table_material: Sequence[str],
    table_basis: Sequence[str],
    table_temperature: Values,
) -> Any:
    """Return where the temperature lies within the rows; where there are none the formula itself says so."""
    try:
        temperatures = _rows(material, basis, table_material, table_basis, table_temperature)[1]
    except Refusal:
        return True
    slack = _SLACK * np.abs(temperatures).max()
    return (temperature >= temperatures[0] - slack) & (temperature <= temperatures[-1] + slack)


_COVERED = condition(
    "the table has no rows of this material and basis on both sides of the temperature, and there is no extrapolation; "
    "extend the table from its source",
    lambda table_material, table_basis, table_temperature, material, basis, temperature: _covers(
        material, basis, temperature, table_material, table_basis, table_temperature
    ),
)


@worksheet_function(
    "MARGIN_ALLOWABLE",
    conditions=(
        condition(
            "the columns of the table must be equally long",
            lambda table_temperature, table_values: table_temperature.shape[-1] == table_values.shape[-1],
        ),
        _COVERED,
    ),
)
def allowable(
    material: Text,
    basis: Text,
    temperature: Temperature,
    table_material: TextColumn,
    table_basis: TextColumn,
    table_temperature: TemperatureColumn,
    table_values: XColumn,
) -> X:
    r"""Allowable of a material and basis at a temperature, from a table of the user's own.

    .. math:: R = R_i + (R_{i+1} - R_i) \frac{\theta - \theta_i}{\theta_{i+1} - \theta_i}

    Parameters
    ----------
    material : text
        Material as the table writes it; case and runs of spaces do not count.
    basis : text
        Basis of the value as the table writes it, such as A, B or S.
    temperature : temperature
        Temperature of the part.
    table_material : column of text
        Material of each row.
    table_basis : column of text
        Basis of each row.
    table_temperature : column of temperature
        Temperature of each row.
    table_values : column of quantity
        Allowable of each row.

    Returns
    -------
    allowable : quantity
        The allowable.

    Notes
    -----
    Linear in temperature between rows of one material and basis, never between bases and never beyond the rows; a
    single row serves at its own temperature alone. MARGIN_ALLOWABLE_SOURCE names the rows that were read.

    References
    ----------
    Common practice; the values are those of the user's table.

    Examples
    --------
    >>> cell('=MARGIN_ALLOWABLE("Alloy", "A", "60 °C", {"Alloy";"Alloy"}, {"A";"A"}, {"°C";20;100}, {"MPa";400;360})')
    [[380.0, 'MPa']]
    """
    found, temperatures = _rows(material, basis, table_material, table_basis, table_temperature)
    if np.any(table_values != table_values[:1]):
        raise Refusal("the table must be the same in all cases")
    return np.interp(temperature, temperatures, table_values[0][found])


@worksheet_function("MARGIN_ALLOWABLE_SOURCE", conditions=(_COVERED,))
def allowable_source(
    material: Text,
    basis: Text,
    temperature: Temperature,
    table_material: TextColumn,
    table_basis: TextColumn,
    table_temperature: TemperatureColumn,
    table_source: TextColumn,
) -> Text:
    r"""Rows of the user's table from which MARGIN_ALLOWABLE takes its value, with the source written in them.

    .. math:: \theta_i \le \theta \le \theta_{i+1}

    Parameters
    ----------
    material : text
        Material as the table writes it.
    basis : text
        Basis of the value as the table writes it.
    temperature : temperature
        Temperature of the part.
    table_material : column of text
        Material of each row.
    table_basis : column of text
        Basis of each row.
    table_temperature : column of temperature
        Temperature of each row.
    table_source : column of text
        Source of each row: document, table, page.

    Returns
    -------
    source : text
        The row, or the two rows between which the value lies, counted from the first below the headings.

    Notes
    -----
    Chooses as MARGIN_ALLOWABLE does; a row without a source is said to have none.

    References
    ----------
    Common practice.

    Examples
    --------
    >>> cell('=MARGIN_ALLOWABLE_SOURCE("Alloy 1", "A", "20 °C", {"Alloy 1"}, {"A"}, {"°C";20}, {"Report 7, table 2"})')
    'row 1: Report 7, table 2'
    """
    found, temperatures = _rows(material, basis, table_material, table_basis, table_temperature)
    sources = aligned(table_source, table_temperature.shape[-1], "table_source")
    told = [f"row {row + 1}: {sources[row] or 'no source given'}" for row in found]
    texts = [_cited(told, temperatures, float(value)) for value in np.ravel(temperature)]
    return np.array(texts, dtype=object).reshape(np.shape(temperature))


def _cited(told: Sequence[str], temperatures: Values, value: float) -> str:
    near = np.flatnonzero(np.abs(temperatures - value) <= _SLACK * np.abs(temperatures).max())
    if near.size:
        return told[int(near[0])]
    above = int(np.searchsorted(temperatures, value))
    return f"{told[above - 1]}; {told[above]}"
