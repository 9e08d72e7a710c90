"""Opening a template: its package for writing, its cells for evaluation, from one reading of the file."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path

from doubler.errors import InputError
from doubler.workbook.evaluate import NotEvaluated
from doubler.workbook.package import Package
from doubler.workbook.reader import workbook_from
from doubler.workbook.template import Port, Template


@dataclass(frozen=True, slots=True)
class OpenedTemplate:
    """A template's package and what was read from it."""

    package: Package
    template: Template


def open_template(path: Path | str) -> OpenedTemplate:
    """Open a workbook as a template.

    Parameters
    ----------
    path : Path or str
        An ``.xlsx`` or ``.xlsm`` file.

    Returns
    -------
    OpenedTemplate

    Raises
    ------
    InputError
        The file is no workbook, has no formula, or its outputs are circular.
    """
    package = Package(path)
    template = Template(workbook_from(package))
    if not template.graph.groups:
        raise InputError(f"{path} holds no formula, so there is nothing to compute; give a calc template")
    for port in template.outputs.values():
        refuse_circular(template, port, Path(path))
    return OpenedTemplate(package, template)


def refuse_circular(template: Template, port: Port, path: Path) -> None:
    """Refuse an output that is part of a circular reference."""
    found = template.graph.group_at(port.sheet, port.address)
    if found is None or "circular" not in template.graph.groups[found[0]].reason:
        return
    reason = template.graph.groups[found[0]].reason
    raise InputError(f"{path}: the output {port.name} ({port.place}) is circular: {reason}; break the circle")


def refuse_unknown(path: Path, port: Port, value: NotEvaluated) -> InputError:
    """Return the error that says which output has no value and why."""
    return InputError(f"{path}: the output {port.name} ({port.place}) cannot be computed: {value.root}: {value.reason}")
