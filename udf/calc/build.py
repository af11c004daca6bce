"""The extension for LibreOffice Calc, written from the declarations with zipfile alone."""

from __future__ import annotations

import json
import sys
import zipfile
from collections.abc import Iterable
from importlib import metadata
from pathlib import Path
from typing import Final
from xml.sax.saxutils import escape, quoteattr

from ..catalogue import FUNCTIONS
from ..declaration import Arg, CellFunction
from .host import fingerprint, host_arguments, may_be_one_cell, method_name

IDENTIFIER: Final = "org.rigidsheet.cells"
INTERFACE: Final = "XFunctions"
SERVICE: Final = f"{IDENTIFIER}.Functions"
JOB: Final = f"{IDENTIFIER}.Loaded"
TIMEOUT_SECONDS: Final = 60.0
FILE_NAME: Final = "rigidsheet.oxt"

HEAD: Final = '<?xml version="1.0" encoding="UTF-8"?>\n'
REGISTRY: Final = (
    'xmlns:oor="http://openoffice.org/2001/registry" xmlns:xs="http://www.w3.org/2001/XMLSchema" '
    'oor:package="org.openoffice.Office"'
)
OFFICE_SIDE: Final = {
    "addin.py": "addin.py",
    "rigidsheet_channel.py": "pythonpath/rigidsheet_channel.py",
    "rigidsheet_repair.py": "pythonpath/rigidsheet_repair.py",
    "rigidsheet_sight.py": "pythonpath/rigidsheet_sight.py",
}


def build(path: str | Path, python: str | None = None) -> Path:
    """Write the extension, bound to the interpreter that its worker runs in, and return its path.

    Parameters
    ----------
    path : str or Path
        The file to write; a folder gets `rigidsheet.oxt`.
    python : str, optional
        Interpreter with Rigidsheet installed; the running one when omitted.
    """
    target = Path(path)
    if target.is_dir():
        target = target / FILE_NAME
    here = Path(__file__).parent
    members = {
        "META-INF/manifest.xml": manifest(),
        "description.xml": description(),
        "types.idl": type_library(),
        "CalcAddIns.xcu": wizard(),
        "Jobs.xcu": jobs(),
        "rigidsheet.components": components(),
        "config.json": configuration(python or sys.executable),
    }
    for source, name in OFFICE_SIDE.items():
        members[name] = (here / source).read_text(encoding="utf-8")
    with zipfile.ZipFile(target, "w", zipfile.ZIP_DEFLATED) as archive:
        for name, text in members.items():
            entry = zipfile.ZipInfo(name, (2020, 1, 1, 0, 0, 0))  # the same bytes from the same functions
            entry.compress_type = zipfile.ZIP_DEFLATED
            entry.external_attr = 0o644 << 16
            archive.writestr(entry, text.encode("utf-8"))
    return target


def version() -> str:
    """Return the installed version of Rigidsheet."""
    return metadata.version("rigidsheet")


def configuration(python: str) -> str:
    """Return what the add-in must know: its names, its functions and how to start the worker."""
    return json.dumps(
        {
            "service": SERVICE,
            "job": JOB,
            "python": python,
            # -E: nothing from the office's environment; -P: no import from the folder it starts in
            "arguments": ["-E", "-P", "-m", "rigidsheet.udf.calc.worker"],
            "fingerprint": fingerprint(),
            "timeout": TIMEOUT_SECONDS,
            "functions": {f.name: [method_name(f.name), may_be_one_cell(f)] for f in FUNCTIONS.values()},
        },
        indent=1,
    )


def type_library() -> str:
    """Return the interface with one method a function.

    Every argument is `any`, which makes it optional and lets numbers, texts and ranges through. What always
    fills several cells is declared as a block. What may be one cell is declared as `any`; then the add-in
    hands blocks over in another way.
    """
    lines = []
    for f in FUNCTIONS.values():
        taken = ", ".join(f"[in] any a{i}" for i in range(len(host_arguments(f))))
        given = "any" if may_be_one_cell(f) else "sequence< sequence< any > >"
        lines.append(f"  {given} {method_name(f.name)}({taken});")
    modules = IDENTIFIER.split(".")
    head = " ".join(f"module {m} {{" for m in modules)
    return "\n".join([head, f"interface {INTERFACE} {{", *lines, "};", " ".join("};" for _ in modules), ""])


def prop(name: str, value: str, translated: bool = True) -> str:
    language = ' xml:lang="en-US"' if translated else ""
    return f"<prop oor:name={quoteattr(name)}><value{language}>{escape(value)}</value></prop>"


def node(name: str, body: str, operation: str = "replace") -> str:
    return f'<node oor:name={quoteattr(name)} oor:op="{operation}">{body}</node>'


def help_of(argument: Arg) -> str:
    """Return the wizard's line for an argument: what it is, what to type, whether it may be left out."""
    words = argument.shape.words()
    limit = f", {argument.limit.words}" if argument.limit is not None else ""
    optional = "; may be left out" if argument.optional else ""
    return f"{argument.help} ({words}{limit}{optional})"


def wizard_node(f: CellFunction) -> str:
    arguments = "".join(
        node(f"a{i}", prop("DisplayName", a.name) + prop("Description", help_of(a)))
        for i, a in enumerate(host_arguments(f))
    )
    return node(
        method_name(f.name),
        prop("DisplayName", f.name)
        + prop("Description", f"{f.group}: {f.line}")
        + prop("Category", "Add-In", False)
        + prop("CompatibilityName", f.name)
        + f'<node oor:name="Parameters">{arguments}</node>',
    )


def wizard() -> str:
    """Return names and help for the function wizard."""
    functions = "".join(wizard_node(f) for f in FUNCTIONS.values())
    body = node(SERVICE, f'<node oor:name="AddInFunctions">{functions}</node>')
    return (
        f'{HEAD}<oor:component-data {REGISTRY} oor:name="CalcAddIns">'
        f'<node oor:name="AddInInfo">{body}</node></oor:component-data>'
    )


def jobs() -> str:
    """Return the registration of the job that runs after a document was loaded."""
    job = node(JOB, f'<prop oor:name="Service"><value>{JOB}</value></prop>')
    event = node("OnLoadFinished", f'<node oor:name="JobList">{node(JOB, "")}</node>', "fuse")
    return (
        f'{HEAD}<oor:component-data {REGISTRY} oor:name="Jobs">'
        f'<node oor:name="Jobs">{job}</node><node oor:name="Events">{event}</node></oor:component-data>'
    )


def components() -> str:
    """Return the registration of the two services in `addin.py`."""

    def implementation(name: str, services: Iterable[str]) -> str:
        listed = "".join(f'<service name="{s}"/>' for s in services)
        return f'<implementation name="{name}">{listed}</implementation>'

    return (
        f'{HEAD}<components xmlns="http://openoffice.org/2010/uno-components">'
        '<component loader="com.sun.star.loader.Python" uri="addin.py">'
        + implementation(SERVICE, (SERVICE, "com.sun.star.sheet.AddIn"))
        + implementation(JOB, (JOB,))
        + "</component></components>"
    )


def manifest() -> str:
    """Return the list of the parts that the office reads."""
    parts = (
        ("uno-typelibrary;type=RDB", "types.idl"),
        ("uno-components", "rigidsheet.components"),
        ("configuration-data", "CalcAddIns.xcu"),
        ("configuration-data", "Jobs.xcu"),
    )
    entries = "".join(
        f'<manifest:file-entry manifest:media-type="application/vnd.sun.star.{kind}" '
        f'manifest:full-path="{name}"/>'
        for kind, name in parts
    )
    return f'{HEAD}<manifest:manifest xmlns:manifest="http://openoffice.org/2001/manifest">{entries}</manifest:manifest>'


def description() -> str:
    """Return name and version as the extension manager shows them."""
    return (
        f'{HEAD}<description xmlns="http://openoffice.org/extensions/description/2006">'
        f'<identifier value="{IDENTIFIER}"/><version value="{version()}"/>'
        '<dependencies><l:LibreOffice-minimal-version value="7.4" d:name="LibreOffice 7.4" '
        'xmlns:l="http://libreoffice.org/extensions/description/2011" '
        'xmlns:d="http://openoffice.org/extensions/description/2006"/></dependencies>'
        '<display-name><name lang="en">Rigidsheet cell functions</name></display-name></description>'
    )
