"""The private office that the live tests share."""

from __future__ import annotations

import os
from collections.abc import Iterator

import live_calc
import pytest


@pytest.fixture(scope="session")
def office_here() -> None:
    """Skip where there is no office; on a build server that is a failure."""
    reason = live_calc.missing()
    if reason:
        if os.environ.get("CI"):
            pytest.fail(f"the live tests must run here: {reason}")
        pytest.skip(reason)


@pytest.fixture(scope="session")
def calc(office_here: None) -> Iterator[live_calc.LiveCalc]:
    """A running private office with the extension."""
    with live_calc.private_office() as office:
        yield office
