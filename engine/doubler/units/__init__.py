"""Unit text as engineers write it, turned into factors; consistent sets; suggestions."""

from doubler.units.convert import convert, factor, factor_in_words, known_units_of, name_for
from doubler.units.dimension import Dimension
from doubler.units.grammar import parse_unit
from doubler.units.heading import split_heading
from doubler.units.pint_bridge import from_pint, is_pint_quantity, to_pint
from doubler.units.quantities import CONSISTENT_SETS, KINDS, ConsistentSet, QuantityKind, consistent_set, kind
from doubler.units.quantity_text import parse_quantity
from doubler.units.reading import read_unit
from doubler.units.unit import Unit, UnitError

__all__ = [
    "CONSISTENT_SETS",
    "KINDS",
    "ConsistentSet",
    "Dimension",
    "QuantityKind",
    "Unit",
    "UnitError",
    "consistent_set",
    "convert",
    "factor",
    "factor_in_words",
    "from_pint",
    "is_pint_quantity",
    "kind",
    "known_units_of",
    "name_for",
    "parse_quantity",
    "parse_unit",
    "read_unit",
    "split_heading",
    "to_pint",
]
