"""The parts of a numpydoc docstring that the record of a function is made from."""

from __future__ import annotations

import inspect
import re
from dataclasses import dataclass

_HEADING = re.compile(r"^(?P<title>[A-Z][A-Za-z ]+)\n-{3,}\n", re.MULTILINE)
_EXAMPLE = re.compile(r">>> cell\((?P<quote>'{3}|')(?P<formula>(?:.|\n)+?)(?P=quote)\)\n(?P<result>(?:(?!>>>).+\n?)+)")
_CONTINUED = re.compile(r"'\s*\n\s*\.\.\.\s*'")
"""Where the text of a formula is broken over two lines of an example."""
_MATH = re.compile(r"^\.\. math::[ \t]*(?P<first>.*)\n(?P<rest>(?:[ \t]+.*\n|\n(?=[ \t]))*)", re.MULTILINE)


@dataclass(frozen=True, slots=True)
class Documentation:
    """A docstring taken apart.

    Attributes
    ----------
    summary
        The first line.
    formula
        The LaTeX of the ``.. math::`` directives, one a line.
    explanation
        The extended summary without the formula.
    parameters
        (type, description) by parameter name.
    returns
        Name, type and description of the result.
    notes, sources
        The sections Notes (assumptions, limits) and References.
    example, example_result
        The first formula given to ``cell(…)`` and what it prints.
    """

    summary: str
    formula: str
    explanation: str
    parameters: dict[str, tuple[str, str]]
    returns: tuple[str, str, str]
    notes: str
    sources: str
    example: str
    example_result: str


def read(function: object) -> Documentation:
    """Take the docstring of `function` apart."""
    text = inspect.getdoc(function) or ""
    pieces = _HEADING.split(text + "\n")
    head, sections = pieces[0], dict(zip(pieces[1::2], pieces[2::2], strict=True))
    summary, _, rest = head.strip().partition("\n")
    formulas = [_one_line(m["first"] + "\n" + m["rest"]) for m in _MATH.finditer(rest + "\n")]
    example = _EXAMPLE.search(sections.get("Examples", "") + "\n")
    entries = _entries(sections.get("Returns", ""))
    name, (type_, description) = next(iter(entries.items()), ("", ("", "")))
    return Documentation(
        summary=summary.strip(),
        formula="\n".join(formulas),
        explanation=_MATH.sub("", rest + "\n").strip(),
        parameters=_entries(sections.get("Parameters", "")),
        returns=(name, type_, description),
        notes=sections.get("Notes", "").strip(),
        sources=sections.get("References", "").strip(),
        example=_CONTINUED.sub("", example["formula"]).replace("\\\\", "\\") if example else "",
        example_result=example["result"].strip() if example else "",
    )


def _one_line(text: str) -> str:
    return " ".join(text.split())


def _entries(section: str) -> dict[str, tuple[str, str]]:
    """Read 'name : type' lines, each followed by an indented description."""
    entries: dict[str, tuple[str, str]] = {}
    names: list[str] = []
    for line in section.splitlines():
        if line and not line.startswith(" "):
            head, _, type_ = line.partition(":")
            names = [name.strip() for name in head.split(",")]
            for name in names:
                entries[name] = (type_.strip(), "")
        elif line.strip():
            for name in names:
                type_, description = entries[name]
                entries[name] = (type_, f"{description} {line.strip()}".strip())
    return entries
