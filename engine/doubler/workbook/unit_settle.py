"""What the formulas say together: units for undeclared inputs, and the one label behind several faults."""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass, field
from fractions import Fraction

from doubler.units import Dimension
from doubler.workbook.carried import Carried, Key, Source, State, known
from doubler.workbook.declared import Declarations
from doubler.workbook.unit_names import name_unit
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
    del declarations
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
        if len(scales) != 1:
            continue
        first = party[0]
        system = next((vote.system for vote in party if vote.system), "")
        name = name_unit(first.dimension, scales[0], system) or first.dimension.name
        if first.dimension.is_none and first.angle_mark and not math.isclose(scales[0], 1.0):
            name = "deg" if math.isclose(scales[0], math.pi / 180, rel_tol=1e-6) else name
        node = known(first.dimension, scales[0], Source(key, key, name, Fraction(1), system))
        if first.angle_mark:
            node = Carried(node.state, node.dimension, node.readings, sources=node.sources, angle_mark=True)
        result.units[key] = node
    return result


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
    rooted, taken = _roots(tracing, list(judged.values()), cells)
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
    findings += [_merged(items) for items in merged.values()]
    order = {sheet.name: index for index, sheet in enumerate(tracing.graph.workbook.sheets)}
    tracing.findings = sorted(findings, key=lambda f: (order.get(f.sheet, 0), f.address, f.kind))
    noted: dict[str, UnitFinding] = {}
    for at, judgement in judged.items():
        for note in judgement.notes:
            host = judgement.host
            noted.setdefault(
                note, UnitFinding(*host, "unit-label", "note", note, areas=rectangles(c[1] for c in cells[at]))
            )
    tracing.notes = sorted(noted.values(), key=lambda f: (order.get(f.sheet, 0), f.address))


def _merged(items: list[tuple[Judgement, Fault, list[Key]]]) -> UnitFinding:
    first, fault, _ = min(items, key=lambda item: item[0].host[1])
    cells = sorted({key[1] for _, _, keys in items for key in keys})
    areas = rectangles(cells) if len(cells) > 1 else ()
    return UnitFinding(
        first.host[0],
        first.host[1],
        fault.kind,
        fault.severity,
        fault.message + (f" (so in {len(cells)} equal formulas)" if len(cells) > 1 else ""),
        fault.factor,
        fault.found,
        fault.expected,
        fault.cells,
        areas,
    )


@dataclass(slots=True)
class _Suspect:
    """An input label that another unit would put right: what the unit would have to be times, by faulty formula."""

    source: Source
    by_need: dict[tuple[Dimension, float], dict[int, tuple[Judgement, Fault]]] = field(default_factory=dict)


def _roots(
    tracing: Tracing, judged: list[Judgement], cells: dict[int, list[Key]]
) -> tuple[list[UnitFinding], set[int]]:
    """Find the input labels that alone explain several faults."""
    suspects: dict[Key, _Suspect] = {}
    for judgement in judged:
        for fault in judgement.faults:
            if fault.sides:
                _suspect(suspects, judgement, fault)
    trusted = _trusted(judged)
    found: list[UnitFinding] = []
    taken: set[int] = set()
    ranked = sorted(suspects.values(), key=lambda s: -max((len(v) for v in s.by_need.values()), default=0))
    for suspect in ranked:
        place = suspect.source.place
        for need, items in sorted(suspect.by_need.items(), key=lambda pair: -len(pair[1])):
            left = [(j, f) for j, f in items.values() if id(f) not in taken]
            if len({id(j) for j, _ in left}) < 2 or place in trusted:
                continue
            finding = _root_finding(tracing, suspect.source, need, left, cells)
            if finding is not None:
                found.append(finding)
                taken.update(id(f) for _, f in left)
            break
    return found, taken


def _suspect(suspects: dict[Key, _Suspect], judgement: Judgement, fault: Fault) -> None:
    for carried, due in fault.sides:
        pairs = [(carried, due, 1)]
        if due.sources:
            pairs.append((due, carried, 1))
        for node, other, _ in pairs:
            for source in node.sources:
                if source.exponent is None or not source.exponent or source.weak:
                    continue
                power = 1 / source.exponent
                dimension = (other.dimension / node.dimension) ** power
                ratios = {(other.readings[0].scale / r.scale) ** float(power) for r in node.readings[:8]}
                for ratio in ratios:
                    need = (dimension, float(f"{ratio:.6e}"))
                    suspect = suspects.setdefault(source.place, _Suspect(source))
                    suspect.by_need.setdefault(need, {})[id(fault)] = (judgement, fault)


def _trusted(judged: Iterable[Judgement]) -> set[Key]:
    """Return the places of units that a sound formula with a declared result confirms."""
    found: set[Key] = set()
    for judgement in judged:
        carried = judgement.carried
        if carried is None or judgement.faults or carried.state is not State.KNOWN:
            continue
        sums = len({s.place for s in carried.sources}) > 1
        if judgement.declared is not None and not judgement.hidden:
            found.update(s.place for s in carried.sources if s.exponent is None or s.exponent)
        elif sums:
            found.update(s.place for s in carried.sources if s.exponent is None)
    return found


def _root_finding(
    tracing: Tracing,
    source: Source,
    need: tuple[Dimension, float],
    items: list[tuple[Judgement, Fault]],
    cells: dict[int, list[Key]],
) -> UnitFinding | None:
    declared = tracing.declarations.unit(*source.cell)
    if declared is None or tracing.graph.group_at(*source.cell) is not None:
        return None
    unit = declared.unit
    dimension, scale = unit.dimension.without_angle() * need[0], unit.scale * need[1]
    name = name_unit(dimension, float(f"{scale:.6e}"), unit.system) or _near_name(dimension, scale, unit.system)
    if name is None or name in ("1", unit.text):
        return None
    misses = [key for judgement, _ in items for key in cells[id(judgement)]]
    shown = ", ".join(cell_text(key) for key in misses[:6]) + (", …" if len(misses) > 6 else "")
    kind = "unit-scale" if need[0].is_none else "unit-label"
    if any(fault.kind == "angle-unit" for _, fault in items):
        kind = "angle-unit"
    message = (
        f"{cell_text(source.cell)} is labelled {unit.text}, but all {len(items)} formulas that read it ({shown}) come "
        f"right only if it is in {name}: label it {name}, or convert its value"
    )
    factor = next((fault.factor for _, fault in items if fault.factor is not None), None)
    return UnitFinding(
        source.cell[0],
        source.cell[1],
        kind,
        "error",
        message,
        factor,
        unit.text,
        name,
        tuple(dict.fromkeys(judgement.host for judgement, _ in items)),
        follows=tuple(misses),
    )


def _near_name(dimension: Dimension, scale: float, system: str) -> str | None:
    """Name a unit whose scale was found from typed conversion constants."""
    from doubler.workbook.unit_names import names_of

    for known_scale, text in names_of(dimension, system):
        if math.isclose(known_scale, scale, rel_tol=2e-3):
            return text
    return None


def _texts(tracing: Tracing) -> list[UnitFinding]:
    """Return what the sheets' unit texts say: those that can't be read, and those that disagree."""
    found = []
    for item in tracing.declarations.unreadable:
        message = f"{cell_text(item.at)} stands where a unit does and can't be read as one: {item.complaint}"
        beside = ((item.sheet, item.address),)
        found.append(UnitFinding(*item.at, "unit-text", "error", message, None, item.text, "", beside))
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
