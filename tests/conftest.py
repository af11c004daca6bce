"""For every test: moderate hypothesis runs without a clock, and proof that the package was imported by its name."""

from __future__ import annotations

import signal
import sys

import pytest
from hypothesis import HealthCheck, settings

pytest.register_assert_rewrite("template_checks")  # its assertions tell their values, too
settings.register_profile(
    "usual", deadline=None, max_examples=60, suppress_health_check=[HealthCheck.too_slow]
)
settings.register_profile(
    "long", deadline=None, max_examples=1000, suppress_health_check=[HealthCheck.too_slow]
)
settings.load_profile("usual")


def pytest_configure(config: pytest.Config) -> None:
    """Listen to Ctrl-C: started in the background of a script, this process and its children would be deaf to it."""
    if signal.getsignal(signal.SIGINT) is signal.SIG_IGN:
        signal.signal(signal.SIGINT, signal.default_int_handler)


def pytest_sessionfinish(session: pytest.Session, exitstatus: int) -> None:
    """Fail when a folder was imported under its bare name: then two copies of its modules were tested."""
    bare = sorted({name.split(".")[0] for name in sys.modules} & {"core", "udf", "workbooks"})
    if bare:
        print(f"\nimported under a bare name instead of rigidsheet.*: {', '.join(bare)}", file=sys.stderr)
        session.exitstatus = pytest.ExitCode.TESTS_FAILED
