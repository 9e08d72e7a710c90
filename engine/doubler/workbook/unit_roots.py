"""One root, one finding: the label that alone explains several faults, and the faults that follow from another."""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass, field
from fractions import Fraction

from doubler.units import Dimension
from doubler.workbook.carried import Key, Source, State
from doubler.workbook.unit_names import name_unit
from doubler.workbook.unit_verdicts import Fault, Judgement, Tracing, UnitFinding, cell_text

Cells = dict[int, list[Key]]


@dataclass(slots=True)
class _Suspect:
    """An input label that another unit would put right: what the unit would have to be times, by faulty formula."""

    source: Source
    by_need: dict[tuple[Dimension, float], dict[int, tuple[Judgement, Fault]]] = field(default_factory=dict)


def roots(
    tracing: Tracing, judged: list[Judgement], cells: Cells
) -> tuple[list[UnitFinding], set[int], dict[int, list[Key]]]:
    """Find the input labels that alone explain several faults.

    Returns
    -------
    list of UnitFinding
        One for each such label.
    set of int
        The faults that are told by them or by another fault, by identity.
    dict
        The cells that follow from a fault that is told, by its identity.
    """
    suspects: dict[Key, _Suspect] = {}
    for judgement in judged:
        for fault in judgement.faults:
            if fault.sides:
                _suspect(suspects, judgement, fault)
    follows = _followers(suspects, judged, cells)
    folded = {at for held in follows.values() for at in held[1]}
    trusted = _trusted(judged)
    found: list[UnitFinding] = []
    taken: set[int] = set(folded)
    ranked = sorted(suspects.values(), key=lambda s: -max((len(v) for v in s.by_need.values()), default=0))
    for suspect in ranked:
        place = suspect.source.place
        for need, items in sorted(suspect.by_need.items(), key=lambda pair: -len(pair[1])):
            left = [(j, f) for j, f in items.values() if id(f) not in taken]
            lines = {(tracing.graph.group_at(*j.host) or (id(j), 0))[0] for j, _ in left}
            if len(lines) < 2 or place in trusted:  # a fill is one formula
                continue
            finding = _root_finding(tracing, suspect.source, need, left, cells)
            if finding is not None:
                found.append(finding)
                taken.update(id(f) for _, f in left)
            break
    return found, taken, {at: keys for at, (keys, _) in follows.items()}


def _followers(
    suspects: dict[Key, _Suspect], judged: list[Judgement], cells: Cells
) -> dict[int, tuple[list[Key], set[int]]]:
    """Find the faults that another label on a faulty formula's own cell would put right, under that formula's fault."""
    follows: dict[int, tuple[list[Key], set[int]]] = {}
    told: set[int] = set()
    for judgement in sorted(judged, key=lambda j: (j.host[0], j.host[1])):
        declared = judgement.declared
        suspect = None if declared is None or declared.weak else suspects.get(declared.cells[0])
        if suspect is None:
            continue
        for fault in judgement.faults:
            if id(fault) in told or not fault.sides:
                continue
            carried, due = fault.sides[0]
            own = {(r.scale / due.readings[0].scale) for r in carried.readings}
            for (dimension, ratio), items in suspect.by_need.items():
                if dimension != carried.dimension / due.dimension:
                    continue
                if not any(math.isclose(ratio, scale, rel_tol=1e-4) for scale in own):
                    continue
                for at, (reader, _) in items.items():
                    if at == id(fault) or at in follows or at in told:
                        continue
                    keys, held = follows.setdefault(id(fault), ([], set()))
                    keys += cells[id(reader)]
                    held.add(at)
                    told.add(at)
    return follows


def _suspect(suspects: dict[Key, _Suspect], judgement: Judgement, fault: Fault) -> None:
    for carried, due in fault.sides:
        for node, other in ((carried, due), (due, carried)):
            across = {s.place: s.exponent for s in other.sources}
            for source in node.sources:
                over = across.get(source.place, Fraction(0))
                if source.exponent is None or over is None or source.exponent == over or source.weak:
                    continue
                power = 1 / (source.exponent - over)
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
        if judgement.declared is not None and not judgement.hidden and judgement.confirms:
            own = judgement.declared.cells[0]
            # A sum under the header of its own terms confirms nothing.
            found.update(s.place for s in carried.sources if s.place != own and (s.exponent is None or s.exponent))
        elif sums:
            found.update(s.place for s in carried.sources if s.exponent is None)
    return found


def _root_finding(
    tracing: Tracing,
    source: Source,
    need: tuple[Dimension, float],
    items: list[tuple[Judgement, Fault]],
    cells: Cells,
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
