"""One LibreOffice session, driven over pipes: run by the Python that has LibreOffice's ``uno`` module.

Standard library and ``uno`` only; nothing of doubler is imported. A request is one line of JSON, ``[verb, arguments]``;
an answer is ``["done", value]`` or ``["failed", sentence]``. The session ends when its input ends.
"""

from __future__ import annotations

import contextlib
import json
import os
import signal
import subprocess
import sys
import time
import uuid
from typing import Any

CELL_EMPTY, CELL_TEXT = 0, 2


class Session:
    """A LibreOffice in a process group of its own, on a profile of its own; hidden unless said otherwise."""

    def __init__(self, program: str, profile_url: str, hidden: bool = True) -> None:
        import uno

        self.uno = uno
        self.hidden = hidden
        pipe = f"doubler{uuid.uuid4().hex}"
        words = [
            program,
            *(["--headless"] if hidden else []),
            "--norestore",
            "--nologo",
            "--nodefault",
            f"-env:UserInstallation={profile_url}",
        ]
        words.append(f"--accept=pipe,name={pipe};urp;StarOffice.ComponentContext")
        clean = {key: value for key, value in os.environ.items() if not key.startswith("PYTHON")}
        self.process = subprocess.Popen(
            words, stdin=subprocess.DEVNULL, stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL,
            env=clean, start_new_session=True,
        )  # fmt: skip
        local = uno.getComponentContext()
        resolver = local.ServiceManager.createInstanceWithContext("com.sun.star.bridge.UnoUrlResolver", local)
        limit = time.monotonic() + 90
        while True:
            try:
                self.context = resolver.resolve(f"uno:pipe,name={pipe};urp;StarOffice.ComponentContext")
                break
            except Exception as error:
                if time.monotonic() > limit or self.process.poll() is not None:
                    self.close()
                    raise RuntimeError(f"LibreOffice did not start ({error})") from error
                time.sleep(0.1)
        self.desktop = self._make("com.sun.star.frame.Desktop")
        self.documents: dict[str, Any] = {}

    def _make(self, service: str) -> Any:
        return self.context.ServiceManager.createInstanceWithContext(service, self.context)

    def _properties(self, **named: Any) -> tuple[Any, ...]:
        made = []
        for name, value in named.items():
            item = self.uno.createUnoStruct("com.sun.star.beans.PropertyValue")
            item.Name, item.Value = name, value
            made.append(item)
        return tuple(made)

    def version(self) -> str:
        """Return LibreOffice's version."""
        provider = self._make("com.sun.star.configuration.ConfigurationProvider")
        node = self._properties(nodepath="/org.openoffice.Setup/Product")
        return str(
            provider.createInstanceWithArguments(
                "com.sun.star.configuration.ConfigurationAccess", node
            ).getByName("ooSetupVersionAboutBox")
        )  # fmt: skip

    def install(self, path: str) -> list[str]:
        """Install an extension for the user and return the identifiers installed."""
        manager = self._extensions()
        abort = manager.createAbortChannel()
        accept = _Accept(self.uno)
        manager.addExtension(self.uno.systemPathToFileUrl(path), (), "user", abort, accept.listener)
        return self.installed()

    def uninstall(self, identifier: str) -> list[str]:
        """Remove an extension of the user and return the identifiers left."""
        manager = self._extensions()
        abort = manager.createAbortChannel()
        for package in manager.getDeployedExtensions("user", abort, None):
            if package.getIdentifier().Value == identifier:
                manager.removeExtension(identifier, package.getName(), "user", abort, _Accept(self.uno).listener)
        return self.installed()

    def installed(self) -> list[str]:
        """Return identifier and version of the user's extensions."""
        manager = self._extensions()
        packages = manager.getDeployedExtensions("user", manager.createAbortChannel(), None)
        return [f"{package.getIdentifier().Value} {package.getVersion()}" for package in packages]

    def _extensions(self) -> Any:
        return self.context.getValueByName("/singletons/com.sun.star.deployment.ExtensionManager")

    def open(self, key: str, path: str) -> None:
        """Open a document, or a new spreadsheet where `path` is empty."""
        url = self.uno.systemPathToFileUrl(path) if path else "private:factory/scalc"
        document = self.desktop.loadComponentFromURL(url, "_blank", 0, self._properties(Hidden=self.hidden))
        if document is None:
            raise RuntimeError(f"LibreOffice could not open {path}")
        self.documents[key] = document

    def calculate(self, key: str) -> float:
        """Recalculate everything and return the seconds it took."""
        start = time.perf_counter()
        self.documents[key].calculateAll()
        return time.perf_counter() - start

    def automatic(self, key: str, on: bool) -> None:
        """Let the document calculate by itself, or only when asked."""
        self.documents[key].enableAutomaticCalculation(on)

    def put(self, key: str, sheet: str, cells: dict[str, Any]) -> None:
        """Set cells: a number, or text as typed (a formula begins with =)."""
        target = self._sheet(key, sheet)
        for address, value in cells.items():
            cell = target.getCellRangeByName(address)
            if isinstance(value, str) and not value.startswith("="):
                cell.setString(value)
            elif isinstance(value, str):
                cell.setFormula(value)
            else:
                cell.setValue(value)

    def put_array(self, key: str, sheet: str, address: str, formula: str) -> None:
        """Set an array formula over a range."""
        self._sheet(key, sheet).getCellRangeByName(address).setArrayFormula(formula)

    def fill_down(self, key: str, sheet: str, address: str) -> None:
        """Fill a range from its first row."""
        direction = self.uno.Enum("com.sun.star.sheet.FillDirection", "TO_BOTTOM")
        self._sheet(key, sheet).getCellRangeByName(address).fillAuto(direction, 1)

    def put_rows(self, key: str, sheet: str, address: str, rows: list[list[Any]]) -> None:
        """Set a block of plain values."""
        self._sheet(key, sheet).getCellRangeByName(address).setDataArray(tuple(map(tuple, rows)))

    def read(self, key: str, sheet: str, address: str) -> list[list[Any]]:
        """Read a block: numbers, text, None for empty cells, and ``{"error": code}`` for error values."""
        block = self._sheet(key, sheet).getCellRangeByName(address)
        area = block.getRangeAddress()
        rows = [list(row) for row in block.getDataArray()]
        for r in range(area.EndRow - area.StartRow + 1):
            for c in range(area.EndColumn - area.StartColumn + 1):
                cell = block.getCellByPosition(c, r)
                if cell.getError():
                    rows[r][c] = {"error": cell.getError()}
                elif rows[r][c] == "" and cell.getType().value == "EMPTY":
                    rows[r][c] = None
        return rows

    def read_many(self, key: str, sheet: str, addresses: list[str]) -> list[list[list[Any]]]:
        """Read several blocks."""
        return [self.read(key, sheet, address) for address in addresses]

    def formulas(self, key: str, sheet: str, address: str) -> list[list[str]]:
        """Return formula texts."""
        return [list(row) for row in self._sheet(key, sheet).getCellRangeByName(address).getFormulaArray()]

    def save(self, key: str, path: str, kind: str) -> None:
        """Save a copy in a file type's name, such as ``Calc MS Excel 2007 XML`` or ``calc8``."""
        self.documents[key].storeToURL(self.uno.systemPathToFileUrl(path), self._properties(FilterName=kind))

    def shut(self, key: str) -> None:
        """Close a document."""
        self.documents.pop(key).close(True)

    def configure(self, path: str, name: str, value: Any) -> None:
        """Set one of LibreOffice's own settings."""
        provider = self._make("com.sun.star.configuration.ConfigurationProvider")
        service = "com.sun.star.configuration.ConfigurationUpdateAccess"
        node = provider.createInstanceWithArguments(service, self._properties(nodepath=path))
        node.setPropertyValue(name, value)
        node.commitChanges()

    def show(self, key: str, sheet: str, address: str, box: list[int], zoom: int) -> None:
        """Put a visible document's window in a place (left, top, width, height) and select cells in it."""
        controller = self.documents[key].getCurrentController()
        window = controller.getFrame().getContainerWindow()
        window.setPosSize(*box, 15)
        window.toFront()
        controller.ZoomValue = zoom
        controller.select(self._sheet(key, sheet).getCellRangeByName(address))

    def widen(self, key: str, sheet: str, widths: dict[str, int]) -> None:
        """Set columns' widths, in hundredths of a millimetre."""
        columns = self._sheet(key, sheet).getColumns()
        for name, width in widths.items():
            columns.getByName(name).Width = width

    def functions(self, prefix: str) -> dict[str, Any]:
        """Return what the function wizard knows of the functions whose name begins with `prefix`."""
        known = self._make("com.sun.star.sheet.FunctionDescriptions")
        found: dict[str, Any] = {}
        for index in range(known.getCount()):
            entry = {item.Name: item.Value for item in known.getByIndex(index)}
            if entry["Name"].startswith(prefix):
                arguments = [[a.Name, a.Description, a.IsOptional] for a in entry["Arguments"] or ()]
                found[entry["Name"]] = [entry["Description"], entry["Category"], arguments]
        return found

    def _sheet(self, key: str, name: str) -> Any:
        sheets = self.documents[key].getSheets()
        return sheets.getByName(name) if name else sheets.getByIndex(0)

    def close(self) -> None:
        """End LibreOffice: politely, then its process group."""
        with contextlib.suppress(Exception):
            for key in list(self.documents):
                self.shut(key)
        with contextlib.suppress(Exception):
            self.desktop.terminate()
        with contextlib.suppress(subprocess.TimeoutExpired):
            self.process.wait(10)
        with contextlib.suppress(OSError):
            if os.name == "posix":
                os.killpg(self.process.pid, signal.SIGKILL)
            else:
                self.process.kill()


class _Accept:
    """Answers the questions of an installation: no licence and no dependency of ours asks anything."""

    def __init__(self, uno: Any) -> None:
        import unohelper
        from com.sun.star.task import XInteractionHandler
        from com.sun.star.ucb import XCommandEnvironment

        approve = uno.getClass("com.sun.star.task.XInteractionApprove")

        class Listener(unohelper.Base, XCommandEnvironment, XInteractionHandler):  # type: ignore[misc]
            def getInteractionHandler(self) -> Any:  # noqa: N802 - UNO's name
                return self

            def getProgressHandler(self) -> Any:  # noqa: N802 - UNO's name
                return None

            def handle(self, request: Any) -> None:
                for continuation in request.getContinuations():
                    found = continuation.queryInterface(uno.getTypeByName(approve.__pyunointerface__))
                    if found is not None:
                        found.select()
                        return

        self.listener = Listener()


def main() -> None:
    """Serve one session: program and profile URL are the process's arguments, then ``visible`` to see it."""
    session: Session | None = None
    try:
        session = Session(sys.argv[1], sys.argv[2], sys.argv[3:] != ["visible"])
        print(json.dumps(["done", session.version()]), flush=True)
        for line in sys.stdin:
            verb, arguments = json.loads(line)
            try:
                reply = ["done", getattr(session, verb)(*arguments)]
            except Exception as error:
                reply = ["failed", f"{type(error).__name__}: {error}"]
            print(json.dumps(reply), flush=True)
    except Exception as error:
        print(json.dumps(["failed", f"{error}"]), flush=True)
    finally:
        if session is not None:
            session.close()


if __name__ == "__main__":
    main()
