"""A project's policy: which factors it asks for, what margin is the smallest, which findings it raises or silences.

The file is TOML, ``doubler.toml`` beside the workbook or named on the command line::

    [factors]               # required factor for margins of a level or mode
    ultimate = 1.5
    fitting = 1.15

    [margins]
    smallest = 0.05

    [tolerances]
    stored = 1e-9           # relative difference of a stored value from its formula's
    moduli = 0.025          # disagreement of elastic constants that is let pass

    [units]
    allowed = ["N", "mm", "MPa", "N·mm", "-"]

    [kinds.unused-input]
    severity = "off"        # off, note, warning or error
    reason = "inputs are shared by all sheets of the set"

    [terms.allowable]       # words and symbols beside those of terms.toml
    symbols = ["Kadm"]
"""

from __future__ import annotations

import tomllib
from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field, replace
from pathlib import Path
from typing import Any

from doubler.check.finding import FAMILY_OF, SEVERITIES, Finding
from doubler.check.values import RELATIVE
from doubler.errors import InputError
from doubler.units import UnitError, parse_unit

NAME = "doubler.toml"
LEVELS_AND_MODES = (
    "limit", "yield", "ultimate", "shear", "bearing", "compression", "buckling", "tension", "bending", "fitting",
    "casting",
)  # fmt: skip
_MODULI = 0.025


@dataclass(frozen=True)
class KindPolicy:
    """What becomes of one kind of finding, and why."""

    severity: str
    reason: str


@dataclass(frozen=True)
class Policy:
    """A project's policy; the default asks for nothing.

    Attributes
    ----------
    path
        The file, or None.
    factors
        Required factor by level or mode.
    smallest_margin
        Margins below it are findings.
    stored, moduli
        Tolerances, relative.
    units
        The units allowed; empty where all are.
    kinds
        Kinds that are raised or silenced.
    terms
        More words and symbols for the table of roles.
    """

    path: Path | None = None
    factors: Mapping[str, float] = field(default_factory=dict)
    smallest_margin: float = 0.0
    stored: float = RELATIVE
    moduli: float = _MODULI
    units: tuple[str, ...] = ()
    kinds: Mapping[str, KindPolicy] = field(default_factory=dict)
    terms: Mapping[str, Mapping[str, Any]] = field(default_factory=dict)

    def applied(self, findings: Iterable[Finding]) -> tuple[list[Finding], list[Finding]]:
        """Part findings into those that stand, with the policy's severity, and those that it silences."""
        kept: list[Finding] = []
        silenced: list[Finding] = []
        for finding in findings:
            rule = self.kinds.get(finding.kind)
            if rule is None:
                kept.append(finding)
            elif rule.severity == "off":
                silenced.append(finding)
            else:
                kept.append(replace(finding, severity=rule.severity))
        return kept, silenced

    def as_object(self, silenced: Iterable[Finding]) -> dict[str, Any]:
        """Return what a report says of the policy: the file, and what was raised or silenced for which reason."""
        counts: dict[str, int] = {}
        for finding in silenced:
            counts[finding.kind] = counts.get(finding.kind, 0) + 1
        return {
            "file": "" if self.path is None else self.path.name,
            "kinds": [
                {"kind": kind, "severity": rule.severity, "reason": rule.reason, "silenced": counts.get(kind, 0)}
                for kind, rule in self.kinds.items()
            ],
        }


def policy_for(workbook: Path, given: Path | str | None = None) -> Policy:
    """Return the policy for a workbook: the file given, else ``doubler.toml`` beside it, else the default.

    Raises
    ------
    InputError
        The file is not there, can't be read, or holds what a policy does not know.
    """
    if given is not None:
        return read_policy(Path(given))
    beside = workbook.parent / NAME
    return read_policy(beside) if beside.is_file() else Policy()


def read_policy(path: Path) -> Policy:
    """Read a policy file.

    Raises
    ------
    InputError
        The file is not there, is no TOML, or holds an unknown key or a value that can't be meant.
    """
    try:
        table = tomllib.loads(path.read_text(encoding="utf-8"))
    except OSError as error:
        raise InputError(f"{path} can't be read ({error.strerror}); name the policy file") from None
    except (tomllib.TOMLDecodeError, UnicodeDecodeError) as error:
        raise InputError(f"{path} is no valid TOML ({error}); mend the policy file") from None
    return _Reader(path).policy(table)


class _Reader:
    def __init__(self, path: Path) -> None:
        self.path = path

    def policy(self, table: dict[str, Any]) -> Policy:
        self._known("", table, ("factors", "margins", "tolerances", "units", "kinds", "terms"))
        factors = self._table(table, "factors")
        self._known("factors", factors, LEVELS_AND_MODES)
        margins = self._table(table, "margins")
        self._known("margins", margins, ("smallest",))
        tolerances = self._table(table, "tolerances")
        self._known("tolerances", tolerances, ("stored", "moduli"))
        units = self._table(table, "units")
        self._known("units", units, ("allowed",))
        return Policy(
            self.path,
            {name: self._number(f"factors.{name}", value, 1.0, 100.0) for name, value in factors.items()},
            self._number("margins.smallest", margins.get("smallest", 0.0), -1.0, 100.0),
            self._number("tolerances.stored", tolerances.get("stored", RELATIVE), 0.0, 1.0),
            self._number("tolerances.moduli", tolerances.get("moduli", _MODULI), 0.0, 1.0),
            self._units(units.get("allowed", [])),
            {kind: self._kind(kind, entry) for kind, entry in self._table(table, "kinds").items()},
            self._terms(self._table(table, "terms")),
        )

    def _known(self, where: str, table: Mapping[str, Any], known: Iterable[str]) -> None:
        known = tuple(known)
        for name in table:
            if name not in known:
                place = f"[{where}] " if where else ""
                raise InputError(f"{self.path}: {place}{name} is not known; write one of {', '.join(known)}")

    def _table(self, table: Mapping[str, Any], name: str) -> dict[str, Any]:
        found = table.get(name, {})
        if not isinstance(found, dict):
            raise InputError(f"{self.path}: {name} must be a table; write [{name}] and its keys below")
        return found

    def _number(self, where: str, value: Any, least: float, most: float) -> float:
        if isinstance(value, bool) or not isinstance(value, int | float) or not least <= value <= most:
            raise InputError(f"{self.path}: {where} = {value!r} must be a number from {least:g} to {most:g}")
        return float(value)

    def _units(self, texts: Any) -> tuple[str, ...]:
        if not isinstance(texts, list) or not all(isinstance(text, str) for text in texts):
            raise InputError(f'{self.path}: units.allowed must be a list of texts, such as ["N", "mm"]')
        for text in texts:
            try:
                parse_unit("1" if text == "-" else text)
            except UnitError as error:
                raise InputError(f"{self.path}: units.allowed: {error}") from None
        return tuple(texts)

    def _kind(self, kind: str, entry: Any) -> KindPolicy:
        if kind not in FAMILY_OF:
            raise InputError(f"{self.path}: [kinds.{kind}]: there is no such kind; write one of {', '.join(FAMILY_OF)}")
        if not isinstance(entry, dict):
            raise InputError(f"{self.path}: kinds.{kind} must be a table with severity and reason")
        self._known(f"kinds.{kind}", entry, ("severity", "reason"))
        severity, reason = entry.get("severity"), entry.get("reason", "")
        if severity not in ("off", *SEVERITIES):
            raise InputError(f"{self.path}: kinds.{kind}.severity = {severity!r}; write off, note, warning or error")
        if not isinstance(reason, str) or not reason.strip():
            raise InputError(f'{self.path}: kinds.{kind} gives no reason; write reason = "…", which the record prints')
        return KindPolicy(severity, reason.strip())

    def _terms(self, table: dict[str, Any]) -> dict[str, dict[str, Any]]:
        parts = ("allowable", "applied", "factor")
        lists = {"mode": LEVELS_AND_MODES[3:], "level": LEVELS_AND_MODES[:3]}
        self._known("terms", table, (*parts, *lists))
        for section, entries in table.items():
            if not isinstance(entries, dict):
                raise InputError(f"{self.path}: terms.{section} must be a table")
            self._known(f"terms.{section}", entries, ("words", "symbols") if section in parts else lists[section])
            for name, texts in entries.items():
                if not isinstance(texts, list) or not all(isinstance(text, str) and text.strip() for text in texts):
                    raise InputError(f"{self.path}: terms.{section}.{name} must be a list of texts")
        return table
