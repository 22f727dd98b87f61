"""The shipped cases, all run once."""

from __future__ import annotations

import pytest

from calc.verification import Check, run


@pytest.fixture(scope="session")
def checks() -> dict[str, Check]:
    return {check.id: check for check in run()}
