"""The chain of a pipe on arrays against sums by hand, and what its schema declares."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np
import pytest

from calc.components import SCHEMAS, Count, Field, Network, Quantity, fitting
from calc.components.liquid import LiquidTerms, liquid
from calc.components.pipe import (
    LAW_INPUT,
    EmpiricalConstants,
    FittingTerms,
    PipeTerms,
    losses,
    transition_limits,
)
from calc.equation import ARRAYS, Labels, Slope, Value, value_of
from calc.physics.friction import LAW_NAMES

FLOWS = np.array([0.03, -0.03, 0.0, 1e-5])

CONSTANTS: EmpiricalConstants[Value] = EmpiricalConstants(
    *(np.array([x]) for x in (10.67, 1.852, 4.8704, 10.2936, 5.33333))
)


def terms(**other: Value) -> PipeTerms[Value]:
    """Return four pipes of 100 m and 200 mm, in pairs of two, each with two fittings."""
    four: Mapping[str, Value] = {
        "length": np.full(4, 100.0),
        "bore": np.full(4, 0.2),
        "roughness": np.full(4, 1e-4),
        "friction_factor": np.full(4, np.nan),
        "hazen_williams_c": np.full(4, np.nan),
        "manning_n": np.full(4, np.nan),
        "parallel": np.full(4, 2.0),
        "viscosity": np.array([1e-6]),
        "gravity": np.array([9.81]),
        "laminar_below": np.array([2000.0]),
        "turbulent_above": np.array([4000.0]),
    }
    parts: FittingTerms[Value] = FittingTerms(
        rows=tuple(f"{pipe}/{k}" for pipe in "abcd" for k in (1, 2)),
        pipe=np.repeat(np.arange(4), 2),
        count=np.tile([1.0, 3.0], 4),
        coefficient_forward=np.tile([0.5, 0.4], 4),
        coefficient_reverse=np.tile([1.0, 0.4], 4),
        bore=np.tile([0.2, 0.1], 4),
    )
    law = Labels(LAW_NAMES, np.array([LAW_NAMES.index("colebrook-white")]))
    rest = {"law": law, "fittings": parts, "constants": CONSTANTS}
    return PipeTerms(rows=("a", "b", "c", "d"), **{**rest, **four, **other})  # type: ignore[arg-type]


def test_the_chain_by_hand() -> None:
    pipe = terms()
    got = losses(ARRAYS, pipe, transition_limits(ARRAYS, pipe), FLOWS)
    # By hand for 15 L/s in each: V = 0.477465 m/s, Re = 95 493, V^2/2g = 0.0116195 m.
    np.testing.assert_array_equal(value_of(got.flow_each), FLOWS / 2)
    assert value_of(got.velocity)[0] == pytest.approx(0.477465, rel=1e-6)
    assert value_of(got.reynolds)[0] == pytest.approx(95493.0, rel=1e-6)
    # f by fixed-point iteration of the published equation, here.
    factor = 0.02
    for _ in range(60):
        factor = (-2 * np.log10(1e-4 / 0.2 / 3.7 + 2.51 / (95492.9658551 * np.sqrt(factor)))) ** -2
    assert value_of(got.friction_factor)[0] == pytest.approx(factor, rel=1e-9)
    head = 0.477464829276**2 / 19.62
    assert value_of(got.friction_loss)[0] == pytest.approx(factor * 500 * head, rel=1e-8)
    # 0.5 on the pipe's bore and three of 0.4 on half that bore, where the velocity head is 16 times as large.
    assert value_of(got.fitting_loss)[0] == pytest.approx((0.5 + 1.2 * 16) * head, rel=1e-8)
    # In reverse the first coefficient is 1.0 and every loss has the other sign.
    assert value_of(got.fitting_loss)[1] == pytest.approx(-(1.0 + 1.2 * 16) * head, rel=1e-8)
    assert value_of(got.friction_loss)[1] == -value_of(got.friction_loss)[0]
    np.testing.assert_array_equal(value_of(got.head_loss), value_of(got.friction_loss) + value_of(got.fitting_loss))


def test_at_rest_nothing_is_lost_and_no_factor_is_defined() -> None:
    pipe = terms()
    got = losses(ARRAYS, pipe, transition_limits(ARRAYS, pipe), FLOWS)
    assert value_of(got.head_loss)[2] == 0.0
    assert np.isnan(value_of(got.friction_factor)[2])


def test_laminar_flow_by_hand() -> None:
    # 128 nu L Q / (pi g D^4) for 5e-6 m3/s in each: Re = 31.8.
    pipe = terms()
    got = losses(ARRAYS, pipe, transition_limits(ARRAYS, pipe), FLOWS)
    assert value_of(got.friction_loss)[3] == pytest.approx(128e-6 * 100 * 5e-6 / (np.pi * 9.81 * 0.2**4), rel=1e-13)


def test_the_slope_of_the_whole_chain_is_its_central_difference() -> None:
    pipe = terms()
    limits = transition_limits(ARRAYS, pipe)
    flow = np.array([0.03, -0.02, 9e-4, 1e-5])
    step = 1e-6 * np.abs(flow)
    sloped = losses(ARRAYS, pipe, limits, Slope(flow, np.ones(4))).head_loss
    assert isinstance(sloped, Slope)
    high, low = (value_of(losses(ARRAYS, pipe, limits, flow + side * step).head_loss) for side in (1, -1))
    np.testing.assert_allclose(sloped.slope, (high - low) / (2 * step), rtol=1e-7)


def test_pipes_without_fittings_lose_to_friction_alone() -> None:
    none = np.zeros(0)
    bare: FittingTerms[Value] = FittingTerms((), np.zeros(0, dtype=np.int64), none, none, none, none)
    pipe = PipeTerms(**{**vars(terms()), "fittings": bare})
    got = losses(ARRAYS, pipe, transition_limits(ARRAYS, pipe), FLOWS)
    np.testing.assert_array_equal(value_of(got.fitting_loss), np.zeros(4))
    np.testing.assert_array_equal(value_of(got.head_loss), value_of(got.friction_loss))


def test_every_law_has_its_input_and_every_field_its_words() -> None:
    assert set(LAW_INPUT) == set(LAW_NAMES)
    for schema in (*SCHEMAS, fitting.SCHEMA):
        assert len({field.name for field in schema.fields}) == len(schema.fields)
        for field in schema.fields:
            assert field.words
            assert schema.field(field.name) is field
        for pair in schema.excludes:
            assert all(isinstance(schema.field(name), Field) for name in pair)
    pipe = next(schema for schema in SCHEMAS if schema.group == "pipes")
    assert pipe.field("no-such-field") is None
    for needed in LAW_INPUT.values():
        field = pipe.field(needed)
        assert field is not None
        assert isinstance(field.form, Quantity)
    assert isinstance(pipe.fields[-3].form, Count)


def test_the_unknown_nodes_of_a_network_are_its_junctions() -> None:
    network = Network(
        nodes=("mere", "cross", "tarn"),
        level=np.array([10.0, np.nan, 5.0]),
        withdrawal=np.zeros(3),
        start=np.array([0, 1]),
        end=np.array([1, 2]),
        open=np.array([True, True]),
        pipes=terms(),  # type: ignore[arg-type]
    )
    np.testing.assert_array_equal(network.unknown, [1])


def test_a_liquid_is_what_is_stated_and_the_rest_from_its_temperature() -> None:
    stated: LiquidTerms[Value] = LiquidTerms(
        altitude=np.zeros(1), temperature=np.array([283.15]), density=np.array([1010.0])
    )
    got = liquid(ARRAYS, stated)
    assert value_of(got.density)[0] == 1010.0
    # IAPWS: 1.3059e-3 Pa.s at 10 degC, here over the density stated.
    assert value_of(got.viscosity)[0] == pytest.approx(1.3059e-3 / 1010.0, rel=1e-3)
    assert got.vapour_pressure is not None


def test_a_liquid_by_its_properties_has_no_vapour_pressure_of_its_own() -> None:
    stated: LiquidTerms[Value] = LiquidTerms(
        altitude=np.zeros(1), density=np.array([900.0]), dynamic_viscosity=np.array([0.09])
    )
    got = liquid(ARRAYS, stated)
    assert value_of(got.viscosity)[0] == pytest.approx(1e-4, rel=1e-15)
    assert got.vapour_pressure is None
    assert value_of(got.atmospheric_pressure)[0] == pytest.approx(101325.0, rel=1e-15)


def test_a_liquid_of_which_too_little_is_known_is_refused() -> None:
    with pytest.raises(ValueError, match="density"):
        liquid(ARRAYS, LiquidTerms[Value](altitude=np.zeros(1), viscosity=np.array([1e-6])))
    with pytest.raises(ValueError, match="viscosity"):
        liquid(ARRAYS, LiquidTerms[Value](altitude=np.zeros(1), density=np.array([1e3])))
