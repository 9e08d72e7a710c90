"""Building the Calc extension (.oxt) from the catalogue: interface, configuration, component and settings.

Nothing here knows a single function: names, arguments, their help and their number come from the catalogue.
"""

from __future__ import annotations

import io
import json
import sys
import zipfile
from collections.abc import Sequence
from dataclasses import dataclass
from importlib import resources
from pathlib import Path
from xml.sax.saxutils import escape, quoteattr

from doubler import __version__, catalogue, mechanics
from doubler.hosts.worker import catalogue_digest
from doubler.workbook.output import write_file

IDENTIFIER = "doubler.functions"
SERVICE = "doubler.Functions"
REASON = "UNIT_REASON"
"""The companion worksheet function that says why a call gives an error."""
CATEGORY = "doubler"
INSIDE = ("calc_pipe", "calc_client", "calc_blanks", "calc_documents")
"""Modules that run inside LibreOffice: standard library only, and each other."""
TIMEOUT = 20.0
"""Seconds after which a call that hangs is given up and the worker is ended."""


@dataclass(frozen=True, slots=True)
class HostArgument:
    """One argument as a spreadsheet program shows it."""

    name: str
    help: str
    optional: bool


@dataclass(frozen=True, slots=True)
class HostFunction:
    """One worksheet function as a spreadsheet program shows it: names and help, from the catalogue."""

    name: str
    help: str
    arguments: tuple[HostArgument, ...]


def host_functions() -> list[HostFunction]:
    """Return what every host registers, from the catalogue, in its order; the companion `REASON` comes last."""
    mechanics.load()
    functions = [
        host_function(function) for name in catalogue.names() if (function := catalogue.lookup(name)) is not None
    ]
    cell = HostArgument("cell", "The cell that shows an error value.", False)
    return [*functions, HostFunction(REASON, "Says in words why a cell shows an error value.", (cell,))]


def host_function(function: catalogue.WorksheetFunction) -> HostFunction:
    """Return one catalogue function as hosts show it, with its closing optional argument `result`."""
    arguments = [HostArgument(a.name, _argument_help(a), a.optional) for a in function.arguments]
    result = (
        'Unit of the result, such as "MPa", or a consistent set such as "N-mm". Left out: value and unit in two cells.'
    )
    return HostFunction(
        function.name,
        function.documentation.summary,
        (*arguments, HostArgument("result", result, True)),
    )


def _argument_help(argument: catalogue.Argument) -> str:
    kind = ("column of " if argument.entries else "") + argument.kind_name
    parts = [f"[{kind}] {' '.join(argument.description.split())}"]
    if argument.choices and not all(choice in argument.description for choice in argument.choices):
        parts.append(f"One of {', '.join(argument.choices)}.")
    if argument.limit and argument.limit.words:
        parts.append(f"It {argument.limit.words}.")
    return " ".join(parts)


def idl(functions: Sequence[HostFunction]) -> str:
    """Return the interface in UNO's interface language."""
    lines = ["module doubler {", "interface XFunctions : com::sun::star::uno::XInterface {"]
    for function in functions:
        lines.append(f"  sequence< sequence<any> > {function.name}({_parameters(function)});")
    lines += [
        "  sequence< sequence<any> > DOUBLER_CALL([in] string name, [in] sequence<any> arguments);",
        "};",
        "service Functions : XFunctions;",
        "};",
    ]
    return "\n".join(lines) + "\n"


def _parameters(function: HostFunction) -> str:
    """Give the types: the document comes first, and Calc fills it in.

    Calc lets only arguments of type `any` be left out; only an `XCellRange` lets a cell through that holds an error.
    """
    kinds = ("sequence< sequence<any> >", "any")
    known = ["com::sun::star::table::XCellRange"] if function.name == REASON else []
    known = known or [kinds[argument.optional] for argument in function.arguments]
    names = [f"[in] {kind} {key}" for kind, key in zip(known, parameter_names(function), strict=True)]
    return ", ".join(["[in] com::sun::star::beans::XPropertySet caller", *names])


def parameter_names(function: HostFunction) -> list[str]:
    """Return the names that the interface gives its parameters: in alphabetical order, and no reserved word."""
    return [f"p{n:02d}" for n in range(1, len(function.arguments) + 1)]


def configuration(functions: Sequence[HostFunction]) -> str:
    """Return the registry data: display names, descriptions, arguments, category, the plain name in .xlsx files."""
    lines = [
        '<?xml version="1.0" encoding="UTF-8"?>',
        (
            '<oor:component-data xmlns:oor="http://openoffice.org/2001/registry" '
            'xmlns:xs="http://www.w3.org/2001/XMLSchema" oor:name="CalcAddIns" oor:package="org.openoffice.Office">'
        ),
        f'<node oor:name="AddInInfo"><node oor:name="{SERVICE}" oor:op="replace"><node oor:name="AddInFunctions">',
    ]
    for function in functions:
        lines.append(f'<node oor:name="{function.name}" oor:op="replace">')
        lines += [
            _property("DisplayName", function.name),
            _property("CompatibilityName", function.name),
            _property("Description", function.help),
            f'<prop oor:name="Category"><value>{CATEGORY}</value></prop>',
            '<node oor:name="Parameters">',
        ]
        for key, argument in zip(parameter_names(function), function.arguments, strict=True):
            lines.append(f'<node oor:name="{key}" oor:op="replace">')
            lines += [_property("DisplayName", argument.name), _property("Description", argument.help), "</node>"]
        lines += ["</node>", "</node>"]
    return "\n".join([*lines, "</node></node></node>", "</oor:component-data>"]) + "\n"


def _property(name: str, text: str) -> str:
    return f'<prop oor:name="{name}"><value xml:lang="en">{escape(text)}</value></prop>'


def settings(command: Sequence[str] | None = None, timeout: float = TIMEOUT) -> dict[str, object]:
    """Return what the client inside LibreOffice must know: the worker's command, versions, the names served.

    Parameters
    ----------
    command : sequence of str, optional
        Another worker than this environment's own.
    timeout : float, optional
        Seconds a call may take.

    Returns
    -------
    dict
    """
    mechanics.load()
    return {
        "command": list(command or worker_command()),
        "version": __version__,
        "digest": catalogue_digest(),
        "timeout": timeout,
        "functions": catalogue.names(),
    }


def worker_command() -> list[str]:
    """Return the words that start a worker in this environment, deaf to PYTHON variables and the current folder."""
    return [sys.executable, "-E", "-P", "-m", "doubler.hosts.worker"]


_MANIFEST = """<?xml version="1.0" encoding="UTF-8"?>
<manifest:manifest xmlns:manifest="http://openoffice.org/2001/manifest">
<manifest:file-entry manifest:full-path="doubler.idl" \
manifest:media-type="application/vnd.sun.star.uno-typelibrary;type=RDB"/>
<manifest:file-entry manifest:full-path="doubler.components" \
manifest:media-type="application/vnd.sun.star.uno-components"/>
<manifest:file-entry manifest:full-path="CalcAddIns.xcu" \
manifest:media-type="application/vnd.sun.star.configuration-data"/>
</manifest:manifest>
"""

_COMPONENTS = f"""<?xml version="1.0" encoding="UTF-8"?>
<components xmlns="http://openoffice.org/2010/uno-components">
<component loader="com.sun.star.loader.Python" uri="doubler_component.py">
<implementation name="doubler.hosts.Functions">
<service name="{SERVICE}"/><service name="com.sun.star.sheet.AddIn"/>
</implementation></component></components>
"""


def extension(command: Sequence[str] | None = None, timeout: float = TIMEOUT) -> bytes:
    """Return the extension as bytes; arguments as in `settings`."""
    functions = host_functions()
    here = resources.files("doubler.hosts")
    description = (
        '<?xml version="1.0" encoding="UTF-8"?>\n'
        '<description xmlns="http://openoffice.org/extensions/description/2006">'
        f"<identifier value={quoteattr(IDENTIFIER)}/><version value={quoteattr(__version__)}/>"
        '<display-name><name lang="en">doubler worksheet functions</name></display-name></description>\n'
    )
    parts = {
        "META-INF/manifest.xml": _MANIFEST,
        "description.xml": description,
        "doubler.idl": idl(functions),
        "doubler.components": _COMPONENTS,
        "CalcAddIns.xcu": configuration(functions),
        "doubler_component.py": (here / "calc_component.txt").read_text(encoding="utf-8"),
        **inside_libreoffice(),
        "doubler_settings.json": json.dumps(settings(command, timeout), indent=1),
    }
    packed = io.BytesIO()
    with zipfile.ZipFile(packed, "w", zipfile.ZIP_DEFLATED) as archive:
        for name, text in parts.items():
            archive.writestr(zipfile.ZipInfo(name, (2020, 1, 1, 0, 0, 0)), text)
    return packed.getvalue()


def inside_libreoffice() -> dict[str, str]:
    """Return the modules of ours that run inside LibreOffice, under the names that they have there."""
    found = {}
    for name in INSIDE:
        text = (resources.files("doubler.hosts") / f"{name}.py").read_text(encoding="utf-8")
        found[f"pythonpath/doubler_{name}.py"] = text.replace("from doubler.hosts.calc_", "from doubler_calc_")
    return found


def write_extension(target: Path, command: Sequence[str] | None = None, timeout: float = TIMEOUT) -> Path:
    """Write the extension to `target` and return it; arguments as in `settings`."""
    write_file(target, [extension(command, timeout)])
    return target
