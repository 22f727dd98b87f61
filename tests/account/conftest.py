"""The demonstration, accounted for once."""

from __future__ import annotations

import pytest
from accounts import ROOT

from calc import pipeline
from calc.account import Account


@pytest.fixture(scope="session")
def demonstration() -> Account:
    return pipeline.account(ROOT / "projects" / "ostrel-transfer-main")
