"""Unit text against a golden table: its factor and dimension, or what its refusal must say."""

import math
import re
from fractions import Fraction
from pathlib import Path
from typing import Any

import pytest
import yaml

from doubler.units import Dimension, UnitError, parse_quantity, parse_unit

TABLE = yaml.safe_load((Path(__file__).parent / "spellings.yaml").read_text(encoding="utf-8"))
SPELLINGS = [(text, row) for row in TABLE["units"] for text in row["texts"]]


def product(expression: str) -> Fraction | float:
    """Evaluate products, quotients and whole powers of decimals, exactly where no pi is in them."""
    total: Fraction | float = Fraction(1)
    for sign, number, power in re.findall(r"([*/]?)([\d.]+|pi)(?:\^(\d+))?", expression):
        value = math.pi if number == "pi" else Fraction(number) ** int(power or 1)
        total = total / value if sign == "/" else total * value
    return total


@pytest.mark.parametrize(("text", "row"), SPELLINGS, ids=[text for text, _ in SPELLINGS])
def test_spelling_has_its_factor_and_dimension(text: str, row: dict[str, Any]) -> None:
    unit = parse_unit(text)
    expected = product(row["factor"])
    assert unit.dimension == Dimension(tuple(Fraction(e) for e in TABLE["dimensions"][row["dimension"]]))
    if isinstance(expected, Fraction) and unit.exact is not None:
        assert unit.exact == expected
    assert unit.scale == pytest.approx(float(expected), rel=1e-15)
    assert unit.offset == pytest.approx(row.get("offset", 0.0), rel=1e-15)
    assert unit.kind == row.get("kind", "")


def test_factors_are_exact_but_for_angles_and_roots() -> None:
    inexact = {row["dimension"] for text, row in SPELLINGS if parse_unit(text).exact is None}
    assert inexact <= {"angle", "angular speed", "intensity"}


@pytest.mark.parametrize("row", TABLE["refused"], ids=lambda row: row["text"])
def test_refusal_says_what_to_write(row: dict[str, str]) -> None:
    with pytest.raises(UnitError, match=re.escape(row["says"])):
        parse_unit(row["text"])


@pytest.mark.parametrize("row", TABLE["quantities"], ids=lambda row: row["text"])
def test_number_and_unit_are_read(row: dict[str, Any]) -> None:
    value, unit = parse_quantity(row["text"])
    assert value == row["value"]
    assert unit == parse_unit(row["unit"])


@pytest.mark.parametrize("row", TABLE["refused quantities"], ids=lambda row: row["text"])
def test_refused_quantity_says_what_to_write(row: dict[str, str]) -> None:
    with pytest.raises(UnitError, match=re.escape(row["says"])):
        parse_quantity(row["text"])


def test_the_table_is_long_and_no_spelling_stands_twice() -> None:
    texts = [text for text, _ in SPELLINGS] + [row["text"] for row in TABLE["refused"]]
    assert len(texts) >= 200
    assert len(texts) == len(set(texts))
