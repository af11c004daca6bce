"""The folder that `rigidsheet excel` writes: VBA module, configuration lines, and the steps in order."""

from __future__ import annotations

import os
import sys
from collections.abc import Mapping
from importlib.metadata import version
from pathlib import Path, PureWindowsPath
from typing import Final

from rigidsheet.core.errors import InputError
from rigidsheet.udf import vba

MODULE_FILE: Final = "RigidsheetFunctions.bas"
CONFIGURATION_FILE: Final = "xlwings.conf"
STEPS_FILE: Final = "STEPS.txt"
EXAMPLE_PYTHON: Final = r"C:\path\to\your\environment\Scripts\python.exe"
MOST_COPIES: Final = 1000

STEPS: Final = """\
Rigidsheet in Excel for Windows
===============================

You need Excel for Windows on a desktop, and the Python environment in which
rigidsheet is installed. You need not have used xlwings before: it came with
rigidsheet and carries the calls from Excel to Python. You copy no code by
hand, and you need not switch on "Trust access to the VBA project object
model".

This folder holds, beside this text,
  {module}
      the functions, as Excel takes them in
  {configuration}
      two or three lines that tell xlwings which Python to use

A. Once on this computer
------------------------
 1. Close Excel.
 2. Open a command prompt in the environment of rigidsheet and type
        xlwings addin install
    This puts the add-in of xlwings where Excel starts it. If you have no
    configuration of xlwings yet, it also makes one that names this Python.
 3. Open the file
        %USERPROFILE%\\.xlwings\\xlwings.conf
    in a text editor. It must hold the lines of {configuration}:
{lines}
    If you use xlwings for nothing else, make it so: change a line that has
    the same first word, add one that is missing, leave all others alone.
    If you do use xlwings for other work, leave that file as it is. Put
    {configuration} into the folder of your calculation sheets, under the
    name xlwings.conf: there it counts for the workbooks of that folder. If
    the folder has such a file already, add the lines to it by hand.
{python_note}
B. Make the add-in of the functions
-----------------------------------
 4. Start Excel with a new, empty workbook. Press Alt+F11: the editor opens.
 5. In the editor: Tools > References, tick "xlwings", OK.
 6. In the editor: File > Import File, choose {module}.
    Then Debug > Compile VBAProject. Nothing must be reported.
 7. Back in Excel press Alt+F8, choose {describe}, Run. It gives the
    functions their texts in the function wizard.
 8. File > Save As, type "Excel Add-in (*.xlam)", name rigidsheet.xlam.
    Close Excel.
 9. Start Excel. File > Options > Add-ins > Manage: Excel Add-ins > Go, tick
    Rigidsheet, OK. From now on every workbook knows the functions.

    Instead of 8 and 9 you can save the workbook as "Excel Macro-Enabled
    Workbook (*.xlsm)": then only this workbook knows the functions.

C. See that it works
--------------------
10. In any workbook type into three cells, one below the other (with
    semicolons for the commas where your Excel asks for them):
{trial}
    The first call starts Python and takes some seconds.
11. If every function shows #VALUE!, press Alt+F8, type {test}, Run.
    It says why Python cannot be reached. Most often step 3 names another
    Python than the one in which rigidsheet is installed.
    #NAME? in place of a result: the add-in of step 9 is not ticked, or the
    workbook was made without Excel. Then press Ctrl+Alt+Shift+F9 once.
    "Compile error" with XLPy marked: step 5 is missing.

D. Afterwards
-------------
12. After an upgrade of rigidsheet: run `rigidsheet excel` again. In Excel
    press Alt+F11, find rigidsheet.xlam, remove its {vba_module},
    import the new file, put the cursor into {describe}, press F5,
    then Ctrl+S. Use the macro as in step 7 when it is an .xlsm.
13. After an upgrade of xlwings: close Excel and repeat step 2.

Leave the button "Import Functions" of xlwings alone for these functions. It
would bring in each of them a second time, and Excel would then know none.

Excel on a Mac and Excel in a browser cannot call Python this way.

Results are as good as the model: rigid bodies, loads as entered. A licensed
or competent engineer decides, not the sheet.
"""

PYTHON_NOTE: Final = """\
    This file was written on a computer without Windows: put the path of
    python.exe of your own environment in place of the one shown.
"""


def configuration(environment: Mapping[str, str], executable: str, prefix: str, windows: bool) -> str:
    """Return the lines for xlwings: which Python to start, and nothing put before its own modules."""
    lines = []
    conda = environment.get("CONDA_EXE", "")
    if windows and conda and environment.get("CONDA_PREFIX") == prefix:
        # the environment has to be activated, or its libraries are not found
        lines += [("CONDA PATH", str(PureWindowsPath(conda).parent.parent)), ("CONDA ENV", prefix)]
    else:
        lines.append(("INTERPRETER_WIN", executable if windows else EXAMPLE_PYTHON))
    # a file numpy.py beside a workbook must not take the place of the real one
    lines.append(("ADD_WORKBOOK_TO_PYTHONPATH", "False"))
    return "".join(f'"{key}","{value}"\n' for key, value in lines)


def trial() -> str:
    """Return the three cells that show a result, a refusal and its reason."""
    return (
        '        =RB_CONVERT("400 mm", "m")          shows 0.4\n'
        '        =RB_CONVERT("400 mm", "kg")         shows #VALUE!\n'
        '        =RB_WHY("RB_CONVERT", "400 mm", "kg")   says why'
    )


def steps(lines: str, windows: bool, names: Mapping[str, str]) -> str:
    """Return the steps for a person who has never used xlwings."""
    return STEPS.format(
        **names,
        lines="\n".join("        " + line for line in lines.splitlines()),
        python_note="" if windows else PYTHON_NOTE,
        trial=trial(),
        describe=vba.DESCRIBE,
        test=vba.TEST,
        vba_module=vba.MODULE,
    )


def write_new(folder: Path, name: str, content: bytes) -> Path:
    """Write a file under `name`, or under a numbered name where another file is; overwrite nothing."""
    stem, suffix = os.path.splitext(name)
    for n in range(1, MOST_COPIES):
        path = folder / (name if n == 1 else f"{stem}-{n}{suffix}")
        try:
            with path.open("xb") as file:
                file.write(content)
        except FileExistsError:
            if path.is_file() and path.read_bytes() == content:
                return path
        else:
            return path
    raise InputError(
        "", f"The folder {folder} holds too many copies of {name}", remedy="Choose another folder"
    )


def write_setup(folder: Path) -> list[Path]:
    """Write what Excel needs into `folder`, which is made when it is missing.

    Parameters
    ----------
    folder : Path
        Where the files go. A file that is there already with other content is kept; the new one gets
        a number.

    Returns
    -------
    list of Path
        The VBA module, the configuration lines, and the steps in order, under the names they were given.

    Raises
    ------
    InputError
        When `folder` is a file, or holds a thousand copies.
    OSError
        When the folder cannot be written.
    """
    if folder.exists() and not folder.is_dir():
        raise InputError("", f"{folder} is a file", remedy="Name a folder")
    folder.mkdir(parents=True, exist_ok=True)
    windows = sys.platform.startswith("win")
    lines = configuration(os.environ, sys.executable, sys.prefix, windows)
    module = write_new(folder, MODULE_FILE, vba.module_text(version("rigidsheet")).encode("ascii"))
    conf = write_new(folder, CONFIGURATION_FILE, configuration_bytes(lines))
    names = {"module": module.name, "configuration": conf.name}
    text = steps(lines, windows, names)
    return [module, conf, write_new(folder, STEPS_FILE, windows_text(text))]


def configuration_bytes(lines: str) -> bytes:
    """Return the configuration as VBA reads it, refusing a path that it cannot read."""
    try:
        return windows_text(lines, errors="strict")
    except UnicodeEncodeError:
        raise InputError(
            "",
            "The path of this Python holds letters that Excel's macros cannot read",
            remedy="Make the environment in a folder with plain letters",
        ) from None


def windows_text(text: str, errors: str = "replace") -> bytes:
    """Return a text as programs of this Windows read it: its code page, its ends of line."""
    encoding = "mbcs" if sys.platform.startswith("win") else "utf-8"
    return text.replace("\n", "\r\n").encode(encoding, errors=errors)
