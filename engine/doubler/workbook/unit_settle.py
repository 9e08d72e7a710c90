"""What the formulas say together: units for undeclared inputs, and the one label behind several faults."""

from __future__ import annotations

import math
from dataclasses import dataclass, field
from fractions import Fraction

from doubler.units import Dimension
from doubler.workbook.carried import Carried, Key, Source, known
from doubler.workbook.declared import Declarations
from doubler.workbook.roles import is_conversion
from doubler.workbook.unit_names import name_unit
from doubler.workbook.unit_roots import roots
from doubler.workbook.unit_verdicts import FOUND, Fault, Judgement, Tracing, UnitFinding, cell_text, rectangles

Lanes = dict[int, list[Judgement]]


@dataclass(slots=True)
class Settlement:
    """The units newly settled for undeclared inputs, and the inputs that results settle two ways."""

    units: dict[Key, Carried] = field(default_factory=dict)
    conflicts: list[UnitFinding] = field(default_factory=list)


@dataclass(frozen=True, slots=True)
class _Vote:
    """What one formula says of an input."""

    dimension: Dimension
    scales: tuple[float, ...]
    system: str
    angle_mark: bool
    by: Key


def distinct(lanes: Lanes) -> list[Judgement]:
    """Return all judgements, each once."""
    return list({id(judgement): judgement for group in lanes.values() for judgement in group}.values())


def settle(lanes: Lanes, declarations: Declarations, settled: dict[Key, Carried]) -> Settlement:
    """Find the units that results settle for undeclared inputs.

    Parameters
    ----------
    lanes : dict
        The judgements by group.
    declarations : Declarations
    settled : dict
        What is settled already.
    """
    votes: dict[Key, list[_Vote]] = {}
    for judgement in distinct(lanes):
        for item in judgement.constraints:
            vote = _Vote(item.dimension, item.scales, item.system, item.angle_mark, judgement.host)
            if item.key not in settled:
                votes.setdefault(item.key, []).append(vote)
    result = Settlement()
    for key, said in votes.items():
        parties = _parties(said)
        if len(parties) > 1:
            sizes = sorted((len(party[1]) for party in parties), reverse=True)
            if sizes[0] >= 2 and sizes[1] == 1:
                parties = [max(parties, key=lambda party: len(party[1]))]
            else:
                conflict = _conflict(key, parties)
                if conflict is not None:
                    result.conflicts.append(conflict)
                continue
        scales, party = parties[0]
        first = party[0]
        if first.dimension.is_none and not first.angle_mark:
            scales = _of_ratio(declarations, key, scales)
        if len(scales) != 1:
            continue
        system = next((vote.system for vote in party if vote.system), "")
        name = name_unit(first.dimension, scales[0], system) or first.dimension.name
        if first.dimension.is_none and first.angle_mark and not math.isclose(scales[0], 1.0):
            name = "deg" if math.isclose(scales[0], math.pi / 180, rel_tol=1e-6) else name
        node = known(first.dimension, scales[0], Source(key, key, name, Fraction(1), system))
        if first.angle_mark:
            node = Carried(node.state, node.dimension, node.readings, sources=node.sources, angle_mark=True)
        result.units[key] = node
    return result


_RATIOS = (1.0, 0.01, 1e-6)
"""Scales that a pure number without a unit may have: plain, percent, millionths."""


def _of_ratio(declarations: Declarations, key: Key, scales: tuple[float, ...]) -> tuple[float, ...]:
    """Return the scale of an input that results make a pure number.

    A number that says nothing of a conversion and is not one, such as an end fixity of 1, does not turn feet into
    inches: it is a plain number, and the formula that would need more of it is at fault.
    """
    for scale in _RATIOS:
        if any(math.isclose(scale, one, rel_tol=1e-9) for one in scales):
            return (scale,)
    sheet = declarations.workbook.sheet(key[0])
    cell = None if sheet is None else sheet.cells.get(key[1])
    value = cell.value if cell is not None and isinstance(cell.value, float) else None
    if value and any(math.isclose(abs(value), one, rel_tol=1e-3) for s in scales for one in (s, 1 / s)):
        return scales
    return scales if is_conversion(declarations.label(*key).words) else (1.0,)


def _parties(said: list[_Vote]) -> list[tuple[tuple[float, ...], list[_Vote]]]:
    """Put together the formulas that can agree on one unit."""
    parties: list[tuple[tuple[float, ...], list[_Vote]]] = []
    for vote in sorted(said, key=lambda v: len(v.scales)):
        for at, (scales, party) in enumerate(parties):
            if party[0].dimension != vote.dimension:
                continue
            shared = tuple(s for s in scales if any(math.isclose(s, o, rel_tol=1e-9) for o in vote.scales))
            if shared:
                parties[at] = (shared, [*party, vote])
                break
        else:
            parties.append((vote.scales, [vote]))
    return parties


def _conflict(key: Key, parties: list[tuple[tuple[float, ...], list[_Vote]]]) -> UnitFinding | None:
    names = []
    for scales, party in parties[:2]:
        name = name_unit(party[0].dimension, scales[0], party[0].system)
        if name is None or len(scales) != 1:
            return None
        names.append(name)
    by = [cell_text(party[0].by) for _, party in parties[:2]]
    same = parties[0][1][0].dimension == parties[1][1][0].dimension
    message = (
        f"{cell_text(key)} declares no unit, and is read in {names[0]} by {by[0]} but in {names[1]} by {by[1]}: write "
        f"its unit beside it, and mend the formula that takes it otherwise"
    )
    return UnitFinding(
        key[0],
        key[1],
        "unit-clash",
        "error" if same else "warning",
        message,
        parties[0][0][0] / parties[1][0][0] if same else None,
        names[0],
        names[1],
        tuple(party[0].by for _, party in parties[:2]),
    )


def gathered(tracing: Tracing, settlement: Settlement) -> None:
    """Put the faults in their places: one finding a root, one a fill, and what the sheet's unit texts say."""
    cells: dict[int, list[Key]] = {}
    judged: dict[int, Judgement] = {}
    for key, judgement in tracing.cells():
        cells.setdefault(id(judgement), []).append(key)
        judged[id(judgement)] = judgement
    rooted, taken, follows = roots(tracing, list(judged.values()), cells)
    merged: dict[tuple[object, ...], list[tuple[Judgement, Fault, list[Key]]]] = {}
    for at, judgement in judged.items():
        for fault in judgement.faults:
            if id(fault) in taken:
                continue
            sign = (
                judgement.host[0],
                id(judgement.tree),
                fault.kind,
                fault.factor,
                fault.expected if fault.factor is None else "",
            )
            merged.setdefault(sign if judgement.tree is not None else (id(fault),), []).append(
                (judgement, fault, cells[at])
            )
    doubled = {key for conflict in settlement.conflicts for key in conflict.cells}
    for judgement in judged.values():
        if judgement.host in doubled:
            judgement.state = FOUND
    findings = [*settlement.conflicts, *rooted, *_texts(tracing)]
    findings += [_merged(items, follows) for items in merged.values()]
    order = {sheet.name: index for index, sheet in enumerate(tracing.graph.workbook.sheets)}
    tracing.findings = sorted(findings, key=lambda f: (order.get(f.sheet, 0), f.address, f.kind))
    noted: dict[tuple[object, ...], tuple[Judgement, str, list[Key]]] = {}
    for at, judgement in judged.items():
        for number, note in enumerate(judgement.notes):
            same = (judgement.host[0], id(judgement.tree), number, judgement.hidden)
            noted.setdefault(same, (judgement, note, []))[2].extend(cells[at])
    tracing.notes = sorted(
        (
            UnitFinding(*first.host, "unit-label", "note", note, areas=rectangles(key[1] for key in keys))
            for first, note, keys in noted.values()
        ),
        key=lambda f: (order.get(f.sheet, 0), f.address),
    )


def _merged(items: list[tuple[Judgement, Fault, list[Key]]], follows: dict[int, list[Key]]) -> UnitFinding:
    first, fault, _ = min(items, key=lambda item: item[0].host[1])
    cells = sorted({key[1] for _, _, keys in items for key in keys})
    areas = rectangles(cells) if len(cells) > 1 else ()
    behind = tuple(dict.fromkeys(key for _, each, _ in items for key in follows.get(id(each), ())))
    also = f"; {', '.join(cell_text(key) for key in behind[:4])} {'miss' if len(behind) > 1 else 'misses'} with it"
    return UnitFinding(
        first.host[0],
        first.host[1],
        fault.kind,
        fault.severity,
        fault.message + (f" (so in {len(cells)} equal formulas)" if len(cells) > 1 else "") + (also if behind else ""),
        fault.factor,
        fault.found,
        fault.expected,
        fault.cells,
        areas,
        behind,
    )


def _texts(tracing: Tracing) -> list[UnitFinding]:
    """Return what the sheets' unit texts say: those that can't be read, and those that disagree."""
    found = []
    for item in tracing.declarations.unreadable:
        message = f"{cell_text(item.at)} stands where a unit does and can't be read as one: {item.complaint}"
        beside = ((item.sheet, item.address),)
        found.append(UnitFinding(*item.at, "unit-text", "error", message, None, item.text, "", beside))
    by_sheet: dict[str, list[tuple[Key, str, str]]] = {}
    for at, (sheet, address, text, unit) in tracing.declarations.pounds.items():
        by_sheet.setdefault(sheet, []).append((at if at[0] == sheet else (sheet, address), text, unit.text))
    for places_of_sheet in by_sheet.values():
        places_of_sheet.sort()
        at, text, meant = places_of_sheet[0]
        others = tuple(place for place, _, _ in places_of_sheet[1:])
        text = text.strip("()[] ")
        more = f", as in {len(others)} other {'place' if len(others) == 1 else 'places'}" if others else ""
        message = f"{text} is a unit of mass where a force is due; it is read as {meant}{more}: write lbf for a force"
        found.append(UnitFinding(*at, "unit-text", "note", message, None, text, meant, others))
    seen: set[tuple[Key, ...]] = set()
    for pair in tracing.declarations.disagreements:
        places = (*pair.first.cells, *pair.second.cells)
        if places in seen:
            continue
        seen.add(places)
        message = (
            f"{cell_text((pair.sheet, pair.address))} has two units: {pair.first.unit.text} ({pair.first.place}, which "
            f"is taken) and {pair.second.unit.text} ({pair.second.place}); leave one"
        )
        texts = pair.first.unit.text, pair.second.unit.text
        found.append(UnitFinding(pair.sheet, pair.address, "unit-text", "warning", message, None, *texts, places))
    return found
