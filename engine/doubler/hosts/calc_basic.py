"""Plain names in .xlsx files for LibreOffice versions that know only the long ones: Basic functions of those names.

Such a version reads `=STRESS_AXIAL(…)` from an .xlsx file as an unknown name. A Basic function of that name in the
profile's own library is found then, is saved back under the same name, and hands everything to the extension.
"""

from __future__ import annotations

import xml.etree.ElementTree as ET
from collections.abc import Sequence
from pathlib import Path
from xml.sax.saxutils import escape

from doubler.hosts.calc_extension import REASON, SERVICE, HostFunction
from doubler.workbook.output import write_file

PLAIN_NAMES_FROM = (25, 2)
"""The first version tried that reads and writes the plain names itself."""
MODULE = "doubler_cells"
PART = 60
"""Functions a module: Basic's modules are limited in size."""

_LIBRARY_HEAD = (
    '<?xml version="1.0" encoding="UTF-8"?>\n'
    '<!DOCTYPE library:library PUBLIC "-//OpenOffice.org//DTD OfficeDocument 1.0//EN" "library.dtd">\n'
)
_MODULE_HEAD = (
    '<?xml version="1.0" encoding="UTF-8"?>\n'
    '<!DOCTYPE script:module PUBLIC "-//OpenOffice.org//DTD OfficeDocument 1.0//EN" "module.dtd">\n'
)
_SPACE = "http://openoffice.org/2000/library"

_SHARED = f"""Global doubler_service As Object

Function doubler_call(name As String, given)
  If IsNull(doubler_service) Then doubler_service = createUnoService("{SERVICE}")
  Dim rows, r, c, high, wide
  rows = doubler_service.DOUBLER_CALL(name, given)
  high = UBound(rows)
  wide = UBound(rows(0))
  If high = 0 And wide = 0 Then
    doubler_call = rows(0)(0)
    Exit Function
  End If
  Dim grid(high, wide)
  For r = 0 To high
    For c = 0 To wide
      grid(r, c) = rows(r)(c)
    Next
  Next
  doubler_call = grid
End Function

Function doubler_mark(Optional given)
  If IsMissing(given) Then
    doubler_mark = Chr(57344) & "missing"
  ElseIf IsArray(given) Then
    doubler_mark = given
  ElseIf IsEmpty(given) Then
    doubler_mark = Chr(57344) & "empty"
  Else
    doubler_mark = given
  End If
End Function
"""


def modules(functions: Sequence[HostFunction]) -> dict[str, str]:
    """Return the Basic modules, name to source, for all functions but the companion `UNIT_REASON`."""
    served = [function for function in functions if function.name != REASON]
    made = {f"{MODULE}_0": _SHARED}
    for number, start in enumerate(range(0, len(served), PART), 1):
        made[f"{MODULE}_{number}"] = "\n".join(_function(function) for function in served[start : start + PART])
    return made


def _function(function: HostFunction) -> str:
    names = [f"a{n}" for n in range(1, len(function.arguments) + 1)]
    parameters = ", ".join(f"Optional {name}" for name in names)
    marked = ", ".join(f"doubler_mark({name})" for name in names)
    return (
        f"Function {function.name}({parameters})\n"
        "  On Error GoTo failed\n"
        f'  {function.name} = doubler_call("{function.name}", Array({marked}))\n'
        "  Exit Function\n"
        "failed:\n"
        f"  {function.name} = CVErr(519)\n"
        "End Function\n"
    )


def install_basic(profile: Path, functions: Sequence[HostFunction]) -> list[Path]:
    """Write the modules into the profile's Standard library, beside what the user has there; LibreOffice is closed."""
    folder = profile / "user" / "basic" / "Standard"
    folder.mkdir(parents=True, exist_ok=True)
    remove_basic(profile)
    written = []
    for name, source in modules(functions).items():
        target = folder / f"{name}.xba"
        text = (
            f'{_MODULE_HEAD}<script:module xmlns:script="http://openoffice.org/2000/script" script:name="{name}" '
            f'script:language="StarBasic">{escape(source)}</script:module>\n'
        )
        write_file(target, [text.encode("utf-8")])
        written.append(target)
    _list_modules(folder, add=[path.stem for path in written])
    containers = profile / "user" / "basic"
    for kind in ("script", "dialog"):
        container = containers / f"{kind}.xlc"
        if not container.exists():
            write_file(container, [_container(kind).encode("utf-8")])
    dialogs = folder / "dialog.xlb"
    if not dialogs.exists():
        write_file(dialogs, [_empty_library().encode("utf-8")])
    return written


def remove_basic(profile: Path) -> list[Path]:
    """Remove our modules from the profile's Standard library and return them; nothing else is touched."""
    folder = profile / "user" / "basic" / "Standard"
    ours = sorted(folder.glob(f"{MODULE}_*.xba"))
    if (folder / "script.xlb").exists():
        _list_modules(folder, add=[])
    for path in ours:
        path.unlink()
    return ours


def _list_modules(folder: Path, add: Sequence[str]) -> None:
    """Rewrite the library's index: what others have there stays, ours is what is in `add`."""
    index = folder / "script.xlb"
    ET.register_namespace("library", _SPACE)
    text = index.read_text(encoding="utf-8") if index.exists() else _empty_library()
    root = ET.fromstring(text)  # the user's own profile, written by LibreOffice
    for element in list(root):
        if str(element.get(f"{{{_SPACE}}}name", "")).startswith(f"{MODULE}_"):
            root.remove(element)
    for name in add:
        ET.SubElement(root, f"{{{_SPACE}}}element", {f"{{{_SPACE}}}name": name})
    write_file(index, [(_LIBRARY_HEAD + ET.tostring(root, encoding="unicode") + "\n").encode("utf-8")])


def _empty_library() -> str:
    return (
        f'{_LIBRARY_HEAD}<library:library xmlns:library="{_SPACE}" library:name="Standard" '
        'library:readonly="false" library:passwordprotected="false"/>\n'
    )


def _container(kind: str) -> str:
    return (
        '<?xml version="1.0" encoding="UTF-8"?>\n'
        '<!DOCTYPE library:libraries PUBLIC "-//OpenOffice.org//DTD OfficeDocument 1.0//EN" "libraries.dtd">\n'
        f'<library:libraries xmlns:library="{_SPACE}" xmlns:xlink="http://www.w3.org/1999/xlink">\n'
        f' <library:library library:name="Standard" xlink:href="$(USER)/basic/Standard/{kind}.xlb/" '
        'xlink:type="simple" library:link="false"/>\n</library:libraries>\n'
    )
