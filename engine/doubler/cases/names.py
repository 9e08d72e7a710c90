"""What a case may be called: its name becomes part of a file's name, of a heading and of a table."""

from __future__ import annotations

import re
import unicodedata
from pathlib import Path
from typing import Any

from doubler.errors import InputError

LONGEST = 100
"""Characters in a case's name; with its suffix the file's name then fits every file system."""
LONGEST_IN_BYTES = 240
"""The same in bytes of UTF-8, in which some file systems count: of 漢 there are three a character."""

_FAULTS = (
    (r"^\s*$", "is empty; give every case a name"),
    (r"^\s|\s$", "begins or ends with a space; write it without"),
    (
        r"[\x00-\x1f\x7f-\x9f\u200b-\u200f\u2028-\u202e\u2060-\u2069\ufeff]",
        "holds a control character; write letters, digits, spaces, - and _",
    ),
    (r'[\\/:*?"<>|]', 'holds a character that no file name takes (\\ / : * ? " < > |); write letters, digits, - and _'),
    (r"^[=+@]", "begins like a formula; begin it with a letter or a digit"),
    (r"^\.|\.$", "begins or ends with a point; begin and end it with a letter or a digit"),
    (r"(?i)^(con|prn|aux|nul|com[0-9¹²³]|lpt[0-9¹²³])(\..*)?$", "is a device's name on some systems; choose another"),
    (r"(?i)^summary$", "would take the place of summary.xlsx; choose another"),
)
_ANY = "|".join(f"(?:{pattern.removeprefix('(?i)')})" for pattern, _ in _FAULTS)
_ANY_FAULT = re.compile(_ANY, re.IGNORECASE)


class CaseNames:
    """Takes the names of a table's cases, batch by batch, and refuses what no file could be called.

    Parameters
    ----------
    path : Path
        The table, for the messages.
    """

    def __init__(self, path: Path) -> None:
        self.path = path
        self._rows: dict[str, int] = {}

    def take(self, names: Any, first_row: int) -> list[str]:
        """Check the names of one batch.

        Parameters
        ----------
        names : sequence of str
        first_row : int
            Row of the first of them in the table, its headings being row 1.

        Returns
        -------
        list of str
            The names themselves.

        Raises
        ------
        InputError
            A name that is empty, hostile, too long, or already taken (also where only capitals differ, or
            how an accent is put together, since some file systems do not tell them apart).
        """
        taken = list(names)
        for row, name in enumerate(taken, start=first_row):
            plain = name.isascii()
            too_long = len(name) > LONGEST or (not plain and len(name.encode()) > LONGEST_IN_BYTES)
            if too_long or _ANY_FAULT.search(name):
                raise InputError(f"{self.path}, row {row}: the case's name {_shown(name)} {_fault(name)}")
            key = name.casefold() if plain else unicodedata.normalize("NFC", name).casefold()
            before = self._rows.setdefault(key, row)
            if before != row:
                raise InputError(
                    f"{self.path}, row {row}: the case's name {_shown(name)} stands in row {before} too; "
                    "give every case a name of its own"
                )
        return taken


def _fault(name: str) -> str:
    if len(name) > LONGEST:
        return f"is {len(name)} characters long; write at most {LONGEST}"
    if len(name.encode()) > LONGEST_IN_BYTES:
        return f"takes {len(name.encode())} bytes in a file's name; write fewer characters ({LONGEST_IN_BYTES} bytes)"
    return next(words for pattern, words in _FAULTS if re.search(pattern, name))


def _shown(name: str) -> str:
    return repr(name if len(name) <= 40 else name[:37] + "…")
