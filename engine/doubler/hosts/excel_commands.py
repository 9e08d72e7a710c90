"""`doubler host excel install | remove | status | test`, through xlwings' open-source part, on Windows."""

from __future__ import annotations

import importlib
import importlib.metadata
import importlib.util
import os
import sys
from pathlib import Path
from typing import Any

from doubler import __version__
from doubler.errors import InputError
from doubler.hosts.calc_status import Finding, Report, report
from doubler.workbook.output import write_file


def run(action: str, profile: Path | None) -> Report:
    """Do one of install, remove, status, test; `profile` is another folder than the user's for the VBA module."""
    folder = profile or default_folder()
    return {"install": install, "remove": remove, "status": status, "test": test}[action](folder)


def default_folder() -> Path:
    """Return where the VBA module is written."""
    roaming = os.environ.get("APPDATA")
    return (Path(roaming) if roaming else Path.home() / ".config") / "doubler"


def module_path(folder: Path) -> Path:
    """Return the VBA module's file."""
    return folder / "doubler_functions.bas"


def _needs_windows() -> None:
    if sys.platform != "win32":
        raise InputError(
            "Excel's worksheet functions run on Windows only; on this system use LibreOffice: doubler host calc install"
        )


def install(folder: Path) -> Report:
    """Write the VBA module and say how it becomes an add-in; Excel itself is not touched."""
    _needs_windows()
    if importlib.util.find_spec("xlwings") is None:
        raise InputError("xlwings is not installed; install it: pip install doubler[excel]")
    from doubler.hosts.excel_vba import vba_module

    functions = importlib.import_module("doubler.hosts.excel_functions")
    udfs = importlib.import_module("xlwings.udfs")
    target = module_path(folder)
    folder.mkdir(parents=True, exist_ok=True)
    # The VBA editor reads the system's code page; the module is ASCII.
    write_file(target, [vba_module(functions, udfs.generate_vba_wrapper).replace("\n", "\r\n").encode("ascii")])
    return Report(
        (
            f"the VBA module is written: {target}",
            "make it an add-in once, as docs/hosts.md shows: xlwings quickstart doubler_addin --addin --ribbon,",
            "open doubler_addin.xlam, import the module in the VBA editor, fill its sheet myaddin.conf in, save:",
            f"Interpreter_Win: {sys.executable}",
            "UDF Modules: doubler.hosts.excel_functions",
            "to undo: doubler host excel remove, and remove the add-in in Excel under File > Options > Add-ins",
        )
    )


def remove(folder: Path) -> Report:
    """Remove the VBA module's file."""
    target = module_path(folder)
    if not target.exists():
        return Report((f"there is no {target}; nothing was installed there",))
    target.unlink()
    return Report(
        (f"removed {target}", "an add-in made from it stays: remove it under File > Options > Add-ins > Excel add-ins")
    )


def status(folder: Path) -> Report:
    """Name versions and what keeps the functions from working, each with its cure."""
    found = [
        Finding("doubler", True, __version__),
        Finding(
            "system",
            sys.platform == "win32",
            sys.platform,
            "worksheet functions in Excel need Windows; on this system use LibreOffice: doubler host calc install",
        ),
        _package("xlwings", "pip install doubler[excel]"),
        _package("pywin32", "pip install pywin32 (it comes with xlwings on Windows)"),
        _module(module_path(folder)),
    ]
    if sys.platform == "win32":
        found += _excel()
    return report(found)


def _package(name: str, cure: str) -> Finding:
    try:
        return Finding(name, True, importlib.metadata.version(name))
    except importlib.metadata.PackageNotFoundError:
        return Finding(name, False, "not installed", cure)


def _module(path: Path) -> Finding:
    """Look whether the VBA module is there and holds every function of the catalogue as it is now."""
    again = "doubler host excel install, then import the module into the add-in again (docs/hosts.md)"
    if not path.is_file():
        return Finding("VBA module", False, f"{path} is not there", again)
    from doubler.hosts.excel_names import vba_functions

    there = vba_functions(path.read_text(encoding="ascii", errors="replace"))
    from doubler.hosts.excel_functions import excel_functions

    due = {host.name: len(host.arguments) for host in excel_functions()}
    if there == due:
        return Finding("VBA module", True, f"{path}, {len(due)} functions")
    changed = sorted(name for name in there.keys() | due.keys() if there.get(name) != due.get(name))
    shown = ", ".join(changed[:5]) + (", …" if len(changed) > 5 else "")
    return Finding("VBA module", False, f"{path} is of another catalogue: {shown}", again)


def _excel() -> list[Finding]:
    """Look in the registry for Excel and its macro security. Not tried on a real Windows."""
    winreg = importlib.import_module("winreg")

    def read(root: Any, path: str, name: str) -> Any:
        try:
            with winreg.OpenKey(root, path) as key:
                return winreg.QueryValueEx(key, name)[0]
        except OSError:
            return None

    number = read(winreg.HKEY_CLASSES_ROOT, r"Excel.Application\CurVer", "")
    if not number:
        cure = (
            "install desktop Excel from Microsoft 365 or a disc; Excel on the web and on phones has no such functions"
        )
        return [Finding("Excel", False, "not registered as a program that can be driven", cure)]
    found = [Finding("Excel", True, str(number))]
    where = read(winreg.HKEY_LOCAL_MACHINE, r"SOFTWARE\Microsoft\Windows\CurrentVersion\App Paths\excel.exe", "")
    if where and "WindowsApps" in str(where):
        cure = "remove the Store's Office and install it from account.microsoft.com"
        found.append(
            Finding("Excel's package", False, f"from the Store ({where}), which COM programs cannot drive", cure)
        )
    release = str(number).rpartition(".")[2] + ".0"
    security = rf"Software\Microsoft\Office\{release}\Excel\Security"
    macros = read(winreg.HKEY_CURRENT_USER, security, "VBAWarnings")
    settings = "File > Options > Trust Center > Trust Center Settings > Macro Settings"
    if macros == 4:
        found.append(Finding("macro security", False, "all macros are switched off", f"allow them under {settings}"))
    trusted = read(winreg.HKEY_CURRENT_USER, security, "AccessVBOM")
    found.append(
        Finding(
            "access to the VBA project",
            trusted == 1,
            "trusted" if trusted == 1 else "not trusted: the module cannot be imported by a program",
            f"tick 'Trust access to the VBA project object model' under {settings}",
        )
    )
    return found


def test(folder: Path) -> Report:
    """Open the conformance workbook in Excel with the add-in loaded and compare every function.

    Not tried against a real Excel by the tool's own tests.
    """
    _needs_windows()
    import tempfile

    from doubler.errors import ErrorValue
    from doubler.hosts import conformance

    if not module_path(folder).is_file():
        raise InputError("the functions are not installed; run: doubler host excel install")
    xlwings = importlib.import_module("xlwings")
    known = conformance.calls()
    wrong: list[str] = []
    with tempfile.TemporaryDirectory() as place:
        path = Path(place) / "conformance.xlsx"
        where = conformance.write_workbook(path, known)
        book = xlwings.Book(str(path))
        try:
            book.app.api.CalculateFull()
            sheet = book.sheets[conformance.SHEET]
            errors = {value.value: value for value in ErrorValue}
            for item in where:
                shown = sheet.range(item.block).options(ndim=2, err_to_str=True).value
                grid = [[errors.get(v, v) if isinstance(v, str) else v for v in row] for row in shown]
                wrong += conformance.differences(grid, item.call)
        finally:
            book.close()
    first = f"{len({c.function for c in known})} functions in {len(known)} calls, Excel: {len(wrong)} cells differ"
    return Report((first, *wrong), tuple(Finding("call", False, w) for w in wrong), not wrong)


test.__test__ = False  # type: ignore[attr-defined]  # not a test of ours: a verb of the command line
