"""What could not be judged, and why: said, never passed over."""

from __future__ import annotations

from collections.abc import Iterator

from doubler.check.finding import Finding
from doubler.check.recognise import quantity_at
from doubler.workbook.addresses import cell_name
from doubler.workbook.evaluate import NotEvaluated
from doubler.workbook.examined import Examined, Key, cell_name_of


def not_recalculated(book: Examined) -> Iterator[Finding]:
    """Name the formulas that could not be recalculated, once a reason on a sheet."""
    found: dict[tuple[str, str], tuple[str, list[Key]]] = {}
    for key, _ in book.formulas() if book.values.not_evaluated else ():
        value = book.value(key)
        if isinstance(value, NotEvaluated):
            found.setdefault((value.root.rpartition("!")[0], value.reason), (value.root, []))[1].append(key)
    for (_, reason), (root, keys) in found.items():
        if "circular" in reason:  # has a finding of its own
            continue
        first = next((key for key in keys if f"{key[0]}!{cell_name(*key[1])}" == root), keys[0])
        others = [key for key in keys if key != first]
        yield Finding(
            first[0],
            cell_name(*first[1]),
            "not-recalculated",
            "warning" if any(_bears_on_strength(book, key) for key in keys) else "note",
            f"Not recalculated: {_sentence(reason)} Its stored value is not confirmed{_more(others)}.",
            "",
            "",
            (),
            tuple(cell_name_of(key) for key in others),
        )


def _bears_on_strength(book: Examined, key: Key) -> bool:
    """Return whether a cell is a quantity with a unit, or a margin: one that a result may hang on."""
    declared = book.declarations.unit(*key)
    return quantity_at(book, key) is not None or (declared is not None and not declared.weak)


def not_traced(book: Examined) -> Iterator[Finding]:
    """Name the formulas whose units could not be traced, once a root."""
    for root, keys in book.tracing.not_traced().items():
        reason = book.tracing.reason(root) or book.tracing.reason(keys[0])
        if "circular" in reason:
            continue
        first = root if root in keys else keys[0]
        others = [key for key in keys if key != first]
        yield Finding(
            first[0],
            cell_name(*first[1]),
            "not-traced",
            "note",
            f"Units not traced: {_sentence(reason)} No unit is vouched for here{_more(others)}.",
            "",
            "",
            () if first == root else (cell_name_of(root),),
            tuple(cell_name_of(key) for key in others),
        )


def notes_on_units(book: Examined) -> Iterator[Finding]:
    """Pass on what the trace took to be so that formulas are sound: literals that must have a unit."""
    for note in book.tracing.notes:
        yield Finding(
            note.sheet,
            note.place,
            note.kind if note.kind != "unit-text" else "unit-text",
            "note",
            note.message,
            note.found,
            note.expected,
            tuple(cell_name_of(key) for key in note.cells),
        )


def _more(others: list[Key]) -> str:
    if not others:
        return ""
    return f", nor in {len(others)} {'cell that depends' if len(others) == 1 else 'cells that depend'} on it"


def _sentence(text: str) -> str:
    text = text.strip().rstrip(".")
    return f"{text}." if text else "it is not known why."
