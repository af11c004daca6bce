"""Run a Basic module in a private, headless office and print what its function Main returns.

    python basic_runner.py OFFICE PROFILE SOURCE

Started by a test with an interpreter that has the office's `uno`. The caller ends the whole process group
should the office hang.
"""

from __future__ import annotations

import contextlib
import os
import subprocess
import sys
import time
from pathlib import Path
from typing import Any

import uno
from com.sun.star.beans import PropertyValue

PATIENCE = 60.0  # seconds for the first start with a fresh profile


def option(name: str, value: Any) -> Any:
    made = PropertyValue()
    made.Name, made.Value = name, value
    return made


def connected(pipe: str) -> Any:
    """Return the context of the office once it listens."""
    local = uno.getComponentContext()
    resolver = local.ServiceManager.createInstanceWithContext("com.sun.star.bridge.UnoUrlResolver", local)
    end = time.monotonic() + PATIENCE
    while True:
        try:
            return resolver.resolve(f"uno:pipe,name={pipe};urp;StarOffice.ComponentContext")
        except Exception:
            if time.monotonic() > end:
                raise
            time.sleep(0.1)


def main(office: str, profile: str, source: str) -> None:
    pipe = f"basic{os.getpid()}"
    started = subprocess.Popen(
        [
            office,
            f"-env:UserInstallation={Path(profile).as_uri()}",
            "--headless",
            "--norestore",
            "--nologo",
            "--nodefault",
            f"--accept=pipe,name={pipe};urp;",
        ],
        stdout=subprocess.DEVNULL,
        stderr=subprocess.DEVNULL,
    )
    context = connected(pipe)
    desktop = context.ServiceManager.createInstanceWithContext("com.sun.star.frame.Desktop", context)
    try:
        book = desktop.loadComponentFromURL(
            "private:factory/scalc", "_blank", 0, (option("Hidden", True), option("MacroExecutionMode", 4))
        )
        libraries = book.BasicLibraries
        if not libraries.hasByName("Standard"):
            libraries.createLibrary("Standard")
        libraries.getByName("Standard").insertByName("Module1", Path(source).read_text(encoding="utf-8"))
        script = book.getScriptProvider().getScript(
            "vnd.sun.star.script:Standard.Module1.Main?language=Basic&location=document"
        )
        answer = script.invoke((), (), ())[0]
        sys.stdout.buffer.write(str(answer).encode("utf-8"))
    finally:
        # the office may close the bridge before it has answered the request to end
        with contextlib.suppress(Exception):
            desktop.terminate()
        started.wait(30)


if __name__ == "__main__":
    main(*sys.argv[1:])
