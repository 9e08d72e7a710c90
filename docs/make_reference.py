"""Make the function reference, docs/functions/, from the catalogue and the published check values.

Run from the repository after a worksheet function or a check value was added or changed:
``.venv/bin/python docs/make_reference.py``. A test fails where the pages and the catalogue differ.
"""

from __future__ import annotations

import ast
import re
import string
from collections import defaultdict
from collections.abc import Iterator, Mapping, Sequence
from pathlib import Path
from typing import Any

import yaml

from doubler import catalogue, mechanics

DOCS = Path(__file__).parent
FUNCTIONS = DOCS / "functions"
PUBLISHED = DOCS.parent / "tests" / "published"
CONFIDENCE = {
    "read": "read in the source",
    "computed": "computed independently",
    "from memory": "from memory",
}
"""What the check values' word of confidence means."""

_NAME = re.compile(rf"\b(?:{'|'.join(catalogue.CATEGORIES)})_[A-Z0-9_]+(?=\()")
_INLINE_MATH = re.compile(r":math:`([^`]+)`")
_LITERAL = re.compile(r"``([^`]+)``")
_MENTION = re.compile(rf"(?<![`\w/#=(])(?:{'|'.join(catalogue.CATEGORIES)})_[A-Z0-9_]*[A-Z0-9](?![\w(_])")


def main() -> None:
    """Write every page, and remove pages of functions that are no more."""
    made = pages()
    FUNCTIONS.mkdir(exist_ok=True)
    for old in FUNCTIONS.glob("*.md"):
        if old.name not in made:
            old.unlink()
    for name, text in made.items():
        (FUNCTIONS / name).write_text(text, encoding="utf-8")


def pages() -> dict[str, str]:
    """Return the text of every page by its file name."""
    mechanics.load()
    functions = [function for name in catalogue.names() if (function := catalogue.lookup(name)) is not None]
    checks = published_checks()
    made = {"README.md": index(functions, checks)}
    for page, (title, chosen) in page_groups(functions).items():
        made[page] = category_page(title, chosen, checks)
    return made


def page_of(name: str) -> str:
    """Return the file name of the page on which a function stands."""
    category, _, rest = name.partition("_")
    if category == "STRESS":
        for page, (_, starts) in STRESS_PAGES.items():
            if any(rest == start or rest.startswith(f"{start}_") for start in starts):
                return page
    return f"{category.lower()}.md"


STRESS_PAGES: dict[str, tuple[str, tuple[str, ...]]] = {
    "stress_states.md": (
        "stress states, criteria, and strain to stress",
        ("PRINCIPAL", "ROTATED", "MOHR", "SHEAR_MAX", "ON_PLANE", "TRACTION", "INVARIANT", "HYDROSTATIC", "OCTAHEDRAL",
         "VON_MISES", "TRESCA", "RANKINE", "COULOMB", "MODIFIED", "DRUCKER", "HOOKE", "ROSETTE", "TRUE", "ENGINEERING"),
    ),
    "stress_contact_pressure.md": (
        "pressure, contact, rotation and temperature",
        ("THIN", "THICK", "INTERFERENCE", "DISC", "HERTZ", "THERMAL", "BIMETAL"),
    ),
    "stress_details.md": (
        "fasteners, lugs and notches",
        ("BOLT", "LUG", "PIN", "BEARING", "DIRECT_SHEAR", "CONCENTRATION", "PLATE_HOLE", "NEUBER", "NOTCH", "FATIGUE"),
    ),
}  # fmt: skip
"""Pages of the largest category, by the word after ``STRESS_``; what fits none stands on ``stress.md``."""


def page_groups(functions: Sequence[Any]) -> dict[str, tuple[str, list[Any]]]:
    """Return title and functions of each page, in the order of the catalogue."""
    grouped: dict[str, list[Any]] = defaultdict(list)
    for function in functions:
        grouped[page_of(function.name)].append(function)
    return {page: (page_title(page, chosen[0].category), chosen) for page, chosen in grouped.items()}


def page_title(page: str, category: str) -> str:
    """Return a page's heading."""
    if page in STRESS_PAGES:
        return f"{category}_: {STRESS_PAGES[page][0]}"
    if category == "STRESS":
        return f"{category}_: stresses in bars and beams, torsion and curved bars"
    return f"{category}_: {catalogue.CATEGORIES[category]}"


def published_checks() -> dict[str, list[dict[str, Any]]]:
    """Return the check values by the name of each function that they use."""
    found: dict[str, list[dict[str, Any]]] = defaultdict(list)
    for path in sorted(PUBLISHED.glob("*.yaml")):
        items = yaml.safe_load(path.read_text(encoding="utf-8"))
        if not isinstance(items, list):
            continue
        for item in items:
            if not (isinstance(item, dict) and {"id", "formula", "source"} <= item.keys()):
                continue
            for name in dict.fromkeys(_NAME.findall(item["formula"])):
                found[name].append(item | {"file": path.name})
    return found


def index(functions: Sequence[Any], checks: Mapping[str, Sequence[Any]]) -> str:
    """Return the page that lists all functions."""
    held = sum(function.name in checks for function in functions)
    lines = [
        "# Worksheet functions",
        "",
        f"{len(functions)} functions, {held} of them held against a check value from outside. The pages are made",
        "from the catalogue by `docs/make_reference.py`; `doubler functions NAME` shows the same on a terminal. How",
        "arguments are given, and what comes back, is said under [arguments and results](#arguments-and-results);",
        "signs and forms under [conventions](../conventions.md).",
        "",
        "> doubler is an aid. Results are to be checked and approved by a qualified engineer under the codes and",
        "> regulations that apply. Read a function's limits before you use it.",
    ]
    for page, (title, chosen) in page_groups(functions).items():
        lines += ["", f"## [{title}]({page})", "", "| function | gives |", "| --- | --- |"]
        lines += [f"| [{f.name}]({page}#{f.name.lower()}) | {table_text(f.documentation.summary)} |" for f in chosen]
    return "\n".join([*lines, "", ARGUMENTS])


ARGUMENTS = """## Arguments and results

| form | in the sheet | meaning |
| --- | --- | --- |
| text | `"12.5 kN"` | a number and its unit |
| pair | `C5:D5` holding `12.5` and `kN` | value cell with its unit cell at the right |
| headed column or row | `B3:B20`, first cell `kN` or `Axial load [kN]` | a vector; the heading gives the unit of all |
| paired columns | `C5:D9` | n values, each with its own unit |
| bare number or range | `C5`, `C5:C20` | where the argument is dimensionless, or `result` names a consistent set |

- The last, optional argument of every function, `result`, says how the result is wanted: a unit (`"MPa"`) or a
  consistent set (`"N-mm"`, `"N-m"`, `"lbf-in"`, `"kip-in"`). A set also says how bare numbers are read.
- Left out, the result is a value and its unit side by side in two cells.
- A vector argument gives a vector result of the same shape; scalars serve for every entry; unlike lengths are an error.
- An argument marked *column* is read as a whole (a curve, a table, a group of fasteners) and gives one result.
- Outside its limits a function gives an error value (`#NUM!` for numbers outside the limits, `#VALUE!` for a wrong
  kind, unit or form), never a plausible number; the reason is printed by `doubler eval` and shown by `UNIT_REASON` in a
  sheet.
"""


PAGE_LINKS = (
    "[All functions](README.md)",
    "[arguments and results](README.md#arguments-and-results)",
    "[signs and forms](../conventions.md)",
)


def category_page(title: str, functions: Sequence[Any], checks: Mapping[str, Sequence[Any]]) -> str:
    """Return one page of the reference."""
    lines = [
        f"# {title}",
        "",
        " · ".join(PAGE_LINKS),
    ]
    for function in functions:
        lines += ["", *function_lines(function, checks.get(function.name, ()))]
    return "\n".join(lines) + "\n"


def function_lines(function: Any, checks: Sequence[Any]) -> Iterator[str]:
    """Yield the lines on one function."""
    documentation = function.documentation
    arguments = [f"[{a.name}]" if a.optional else a.name for a in function.arguments]
    yield from (f"## {function.name}", "", prose(documentation.summary), "")
    yield from ("```text", f"{function.name}({', '.join([*arguments, '[result]'])})", "```", "")
    for formula in documentation.formula.splitlines():
        yield from ("```math", formula, "```", "")
    if documentation.explanation:
        yield from (prose(documentation.explanation), "")
    yield from ("| argument | kind | | limits |", "| --- | --- | --- | --- |")
    for argument in function.arguments:
        yield f"| `{argument.name}` | {kind(argument)} | {table_text(argument.description)} | {limits(argument)} |"
    result = function.result
    columns = f"; {len(result.names)} cells in a row: {', '.join(result.names)}" if result.names else ""
    columns += f"; {result.size} rows and columns" if result.size else ""
    yield from (f"| **result** | {result.kind_name}{columns} | {table_text(result.description)} | |", "")
    yield from limit_lines(function)
    if documentation.sources:
        yield from (f"**Source.** {prose(documentation.sources)}", "")
    yield from example_lines(documentation)
    yield from check_lines(checks)


def kind(argument: Any) -> str:
    """Return what an argument is, for the table."""
    if argument.choices:
        return " or ".join(f'`"{choice}"`' for choice in argument.choices)
    return f"column of {argument.kind_name}" if argument.entries else str(argument.kind_name)


def limits(argument: Any) -> str:
    """Return an argument's limit and default, for the table."""
    words = [table_text(argument.limit.words)] if argument.limit else []
    if argument.optional:
        words.append("may be left out" if argument.default is None else f"left out: {shown(argument.default)}")
    return "; ".join(words)


def limit_lines(function: Any) -> Iterator[str]:
    """Yield conditions, assumptions and limits."""
    if not (function.conditions or function.documentation.notes):
        return
    yield from ("**Assumptions and limits.**", "")
    for rule in function.conditions:
        yield f"- Refused with: {prose(rule.words)}."
    if function.conditions:
        yield ""
    if function.documentation.notes:
        yield from (prose(function.documentation.notes), "")


def example_lines(documentation: Any) -> Iterator[str]:
    """Yield the example as typed and as the sheet then shows it."""
    yield from ("**Example.** Typed in a cell:", "", "```text", documentation.example, "```", "")
    try:
        value = ast.literal_eval(documentation.example_result)
    except (SyntaxError, ValueError):
        value = documentation.example_result
    rows = value if isinstance(value, list) else [[value]]
    if len(rows) == 1 and len(rows[0]) == 1:
        yield from (f"The cell shows **{table_text(shown(rows[0][0]))}**.", "")
        return
    letters = string.ascii_uppercase[: len(rows[0])]
    yield from ("The cells show", "", f"| | {' | '.join(letters)} |", "| --- |" + " ---: |" * len(letters))
    for number, row in enumerate(rows, start=1):
        yield f"| **{number}** | {' | '.join(table_text(shown(value)) for value in row)} |"
    yield ""


def check_lines(checks: Sequence[Any]) -> Iterator[str]:
    """Yield the check values from outside, those of one source together."""
    if not checks:
        yield "**Check values.** None from outside yet; the example and the function's own tests hold it."
        return
    grouped: dict[tuple[str, str, str], list[str]] = defaultdict(list)
    for item in checks:
        label = item["id"] + (" (the source errs: it prints another number)" if "source_error" in item else "")
        grouped[item["source"], item["confidence"], item["file"]].append(label)
    yield from ("**Check values.**", "", "| source | confidence | checks |", "| --- | --- | --- |")
    for (source, confidence, file), ids in grouped.items():
        link = f"[{file.removesuffix('.yaml')}](../../tests/published/{file})"
        trust = CONFIDENCE[confidence]
        if any("derivation" in item for item in checks if (item["source"], item["file"]) == (source, file)):
            trust = f"[{trust}](../../tests/published/derivations/{Path(file).stem}.py)"
        yield f"| {table_text(source)} | {trust} | {link}: {', '.join(ids)} |"


def shown(value: Any) -> str:
    """Return a value as a cell shows it."""
    if value is None:
        return ""
    if isinstance(value, bool):
        return str(value).upper()
    return f"{value:.10g}" if isinstance(value, float | int) else str(value)


def prose(text: str) -> str:
    """Return docstring text as Markdown: math and literals, and names of functions as links."""
    text = _INLINE_MATH.sub(lambda match: f"$`{' '.join(match[1].split())}`$", text)
    text = _LITERAL.sub(r"`\1`", text)
    pieces = re.split(r"(\$?`[^`]+`\$?)", text)
    pieces[::2] = [_MENTION.sub(_linked, escaped(piece)) for piece in pieces[::2]]
    return "".join(pieces)


def escaped(text: str) -> str:
    """Escape what Markdown would take for markup between words: a star, a bar of a table, an angle bracket."""
    return re.sub(r"([*<>]|(?<=\w)_(?=\W|$))", r"\\\1", text)


def _linked(match: re.Match[str]) -> str:
    name = match[0]
    return f"[{name}]({page_of(name)}#{name.lower()})" if catalogue.lookup(name) else name


def table_text(text: str) -> str:
    """Return text for a cell of a table: one line, bars escaped."""
    return " ".join(prose(text).split()).replace("|", "\\|")


if __name__ == "__main__":
    main()
