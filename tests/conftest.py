"""What holds for every test: one that looks at a real page or PDF may not be passed over in silence."""

from __future__ import annotations

from collections.abc import Generator

import pytest

KEPT = ("browser", "pdf")


@pytest.hookimpl(wrapper=True)
def pytest_runtest_makereport(
    item: pytest.Item, call: pytest.CallInfo[None]
) -> Generator[None, pytest.TestReport, pytest.TestReport]:
    """Turn the skipping of a browser or PDF test into a failure, wherever it runs."""
    del call
    report = yield
    if report.skipped and not hasattr(report, "wasxfail") and any(item.get_closest_marker(m) for m in KEPT):
        report.outcome = "failed"
        report.longrepr = f"a browser or PDF test may not be skipped: {report.longrepr}"
    return report


@pytest.hookimpl(wrapper=True)
def pytest_make_collect_report(
    collector: pytest.Collector,
) -> Generator[None, pytest.CollectReport, pytest.CollectReport]:
    """Turn the skipping of a whole module into an error: its marks are then never seen."""
    report = yield
    if report.skipped:
        report.outcome = "failed"
        report.longrepr = f"{collector.nodeid}: a module may not be skipped whole: {report.longrepr}"
    return report
