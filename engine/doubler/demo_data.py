"""Where the shipped templates and the demo's data are found: inside the installed package, or in the repository."""

from __future__ import annotations

from pathlib import Path

from doubler.errors import InputError

_HERE = Path(__file__).resolve()


def templates_folder() -> Path:
    """Return the folder that holds the shipped templates, with the demo's data in its folder ``demo``.

    Returns
    -------
    Path
        ``doubler/workbook_templates`` of an installed package; ``workbook_templates`` of a checked-out repository.

    Raises
    ------
    InputError
        Neither is there: the installation is incomplete.
    """
    places = (_HERE.parent / "workbook_templates", _HERE.parents[2] / "workbook_templates")
    for place in places:
        if (place / "tension_strap.xlsx").is_file():
            return place
    raise InputError(
        f"the shipped templates are missing (looked in {places[0]} and {places[1]}); install doubler again"
    )
