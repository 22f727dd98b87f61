"""Works written short: pipes as records, everything else by default."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from typing import Any

import numpy as np
import pytest

from calc.second import Works

Build = Callable[..., Works]


def build_works(
    levels: Sequence[float | None],
    pipes: Sequence[Mapping[str, Any]],
    withdrawals: Sequence[float] | None = None,
    **constants: Any,  # noqa: ANN401
) -> Works:
    """Return works of `levels` (None at a junction) and `pipes` (start, end and what differs)."""

    def column(name: str, default: float) -> np.ndarray[Any, np.dtype[np.float64]]:
        return np.array([pipe.get(name, default) for pipe in pipes], dtype=np.float64)

    return Works(
        node_count=len(levels),
        level=np.array([np.nan if level is None else level for level in levels], dtype=np.float64),
        withdrawal=np.array(withdrawals or [0.0] * len(levels), dtype=np.float64),
        start=np.array([pipe["start"] for pipe in pipes], dtype=np.int64),
        end=np.array([pipe["end"] for pipe in pipes], dtype=np.int64),
        open=np.array([pipe.get("open", True) for pipe in pipes], dtype=np.bool_),
        parallel=column("parallel", 1.0),
        length=column("length", 100.0),
        bore=column("bore", 0.3),
        roughness=column("roughness", np.nan),
        factor=column("factor", np.nan),
        hazen_williams_c=column("hazen_williams_c", np.nan),
        manning_n=column("manning_n", np.nan),
        law=tuple(pipe.get("law", "colebrook-white" if "roughness" in pipe else "fixed") for pipe in pipes),
        loss_forward=column("loss_forward", 0.0),
        loss_reverse=column("loss_reverse", 0.0),
        **{"gravity": 9.80665, "viscosity": 1e-6, **constants},
    )


@pytest.fixture
def build() -> Build:
    return build_works
