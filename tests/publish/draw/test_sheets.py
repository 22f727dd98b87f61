"""Every drawing at every size: nothing overlaps, nothing is clipped, the same bytes twice."""

from __future__ import annotations

import sys
from pathlib import Path

import pytest

sys.path.insert(0, str(Path(__file__).parent))

import audit
import gallery

from calc.publish.draw import svg

SHEETS = dict(gallery.sheets())


@pytest.mark.parametrize("name", SHEETS)
def test_clean(name):
    assert audit.faults(SHEETS[name]()) == []


@pytest.mark.parametrize("name", ["star-3", "net-12", "balance-30", "conv-12-zero"])
def test_same_bytes(name):
    assert svg(SHEETS[name]()) == svg(SHEETS[name]())
