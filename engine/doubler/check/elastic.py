"""Findings about elastic constants: those of one material that do not agree, and those that no material has."""

from __future__ import annotations

from collections.abc import Iterator

from doubler.check.finding import Finding
from doubler.check.recognise import quantities
from doubler.workbook.addresses import cell_name
from doubler.workbook.examined import Examined, Key, cell_name_of, shown

SURE, DOUBTFUL = 0.05, 0.025
"""Disagreement of a modulus with the others from which it is an error, and from which it is a warning: above what
rounding of handbook values to three digits does (common practice)."""

_E, _G, _K, _NU = "young's modulus", "shear modulus", "bulk modulus", "poisson's ratio"
_NAMES = {_E: "E", _G: "G", _K: "K", _NU: "ν"}


def poisson_ranges(book: Examined) -> Iterator[Finding]:
    """Find a Poisson's ratio outside -1 … 0.5 and a modulus that is not positive."""
    for key, name in quantities(book):
        value = book.number(key) if name in _NAMES else None
        if value is None:
            continue
        unit = book.declarations.unit(*key)
        text = shown(value, "" if unit is None or unit.weak else unit.unit.text)
        if name == _NU:
            if unit is not None:
                value *= unit.unit.scale
            if -1.0 < value <= 0.5:
                continue
            message = (
                f"A Poisson's ratio of {text} belongs to no isotropic material (it lies between -1 and 0.5); write "
                "the ratio of "
                "the material's data sheet."
            )
            expected = "-1 … 0.5"
        elif value > 0:
            continue
        else:
            message = f"A {name} of {text} belongs to no material; write a positive modulus."
            expected = "above 0"
        yield Finding(key[0], cell_name(*key[1]), "poisson-range", "error", message, text, expected)


def modulus_mismatches(book: Examined, doubtful: float = DOUBTFUL) -> Iterator[Finding]:
    """Find E, G, K and ν given side by side for one isotropic material that do not agree."""
    for cells in _materials(book):
        values = {name: _si(book, key) for name, key in cells.items()}
        if any(value is None for value in values.values()):
            continue
        numbers = {name: value for name, value in values.items() if value is not None}
        if not -1.0 < numbers.get(_NU, 0.3) < 0.5 or any(v <= 0 for n, v in numbers.items() if n != _NU):
            continue
        yield from _judge(book, cells, numbers, doubtful)


def _si(book: Examined, key: Key) -> float | None:
    value, declared = book.number(key), book.declarations.unit(*key)
    return None if value is None else value * (declared.unit.scale if declared is not None else 1.0)


def _materials(book: Examined) -> Iterator[dict[str, Key]]:
    """Yield groups of constants that stand together: along a row, or one below the other with no other between."""
    found: dict[Key, str] = {key: name for key, name in quantities(book) if name in _NAMES}
    rows: dict[tuple[str, int], list[Key]] = {}
    columns: dict[tuple[str, int], list[Key]] = {}
    for key in found:
        rows.setdefault((key[0], key[1][0]), []).append(key)
        columns.setdefault((key[0], key[1][1]), []).append(key)
    used: set[Key] = set()
    for across, lines in ((True, rows), (False, columns)):
        for line in lines.values():
            keys = sorted((key for key in line if key not in used), key=lambda key: key[1])
            for group in _stretches(keys, found, across=across):
                if len(group) >= 3 and _decisive(group):
                    used.update(group.values())
                    yield group


def _stretches(keys: list[Key], found: dict[Key, str], *, across: bool) -> Iterator[dict[str, Key]]:
    group: dict[str, Key] = {}
    last: int | None = None
    for key in keys:
        place = key[1][1] if across else key[1][0]
        apart = last is not None and place - last > (12 if across else 4)
        if apart or found[key] in group:
            yield group
            group = {}
        group[found[key]] = key
        last = place
    yield group


def _decisive(group: dict[str, Key]) -> bool:
    return len(group) >= 3


def _judge(book: Examined, cells: dict[str, Key], values: dict[str, float], doubtful: float) -> Iterator[Finding]:
    """Compare each constant with what the others give; report the one whose change mends all."""
    worst = max(_disagreements(values).items(), key=lambda item: item[1], default=None)
    if worst is None or worst[1] < doubtful:
        return
    name = _culprit(values)
    key = cells[name]
    due = _from_others(name, values)
    declared = book.declarations.unit(*key)
    scale = declared.unit.scale if declared is not None else 1.0
    unit = declared.unit.text if declared is not None and not declared.weak else ""
    given, right = shown(values[name] / scale, unit), "" if due is None else shown(due / scale, unit)
    others = ", ".join(f"{_NAMES[other]} ({cell_name(*cells[other][1])})" for other in cells if other != name)
    yield Finding(
        key[0],
        cell_name(*key[1]),
        "modulus-mismatch",
        "error" if worst[1] >= max(SURE, doubtful) else "warning",
        f"{_NAMES[name]} = {given} does not agree with {others} of the same isotropic material, which give {right} "
        f"({100 * worst[1]:.1f} % apart); correct the constant that is wrong, or say that the material is not "
        "isotropic.",
        given,
        right,
        tuple(cell_name_of(other) for other in cells.values() if other != key),
    )


def _relations(values: dict[str, float]) -> dict[tuple[str, ...], float]:
    """Return for each relation among three constants what it gives for its last over what is given, minus 1."""
    e, g, k, nu = (values.get(name) for name in (_E, _G, _K, _NU))
    found: dict[tuple[str, ...], float] = {}
    if e is not None and nu is not None and g is not None:
        found[_E, _NU, _G] = e / (2 * (1 + nu)) / g - 1
    if e is not None and nu is not None and k is not None:
        found[_E, _NU, _K] = e / (3 * (1 - 2 * nu)) / k - 1
    if e is not None and g is not None and k is not None:
        found[_G, _K, _E] = 9 * k * g / (3 * k + g) / e - 1
    if nu is not None and g is not None and k is not None and e is None:
        found[_NU, _G, _K] = 2 * g * (1 + nu) / (3 * (1 - 2 * nu)) / k - 1
    return found


def _disagreements(values: dict[str, float]) -> dict[tuple[str, ...], float]:
    return {names: abs(apart) for names, apart in _relations(values).items()}


def _from_others(name: str, values: dict[str, float]) -> float | None:
    """Return a constant from two others; the pair is chosen that conditions it best."""
    e, g, k, nu = (values.get(other) if other != name else None for other in (_E, _G, _K, _NU))
    if name == _G:
        if e is not None and nu is not None:
            return e / (2 * (1 + nu))
        return 3 * k * e / (9 * k - e) if e is not None and k is not None and 9 * k > e else None
    if name == _E:
        if g is not None and nu is not None:
            return 2 * g * (1 + nu)
        return 9 * k * g / (3 * k + g) if g is not None and k is not None else None
    if name == _NU:
        if e is not None and g is not None:
            return e / (2 * g) - 1
        return (3 * k - e) / (6 * k) if e is not None and k is not None else None
    if e is not None and nu is not None:
        return e / (3 * (1 - 2 * nu))
    return None if g is None or nu is None else 2 * g * (1 + nu) / (3 * (1 - 2 * nu))


def _culprit(values: dict[str, float]) -> str:
    """Return the constant whose mending makes all relations agree best; of three alike, the shear or bulk modulus."""
    best, least = "", float("inf")
    for name in (_G, _K, _NU, _E):
        if name not in values:
            continue
        due = _from_others(name, values)
        if due is None or (name == _NU and not -1.0 < due < 0.5):
            continue
        left = max(_disagreements(values | {name: due}).values(), default=0.0)
        if left < least - 1e-9:
            best, least = name, left
    return best or _G
