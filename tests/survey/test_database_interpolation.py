"""Interpolation on a grid: against scipy's, at nodes, outside, and in the scales that span decades."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.interpolate import RegularGridInterpolator

from aero.survey.interpolate import SCALES, centres, face_pairs, mesh, multilinear, scale_of

AXES = (
    np.array([0.0, 1.0, 3.0, 3.5]),
    np.array([10.0, 20.0]),
    np.array([-0.2, 0.0, 0.1]),
    np.array([0.0, 0.3]),
)


def test_it_is_scipys_linear_interpolation() -> None:
    """scipy.interpolate.RegularGridInterpolator, method "linear": another code for the same formula."""
    random = np.random.default_rng(1)
    values = random.normal(size=(3, 4, 2, 3, 2))
    where = [random.uniform(nodes[0], nodes[-1], 200) for nodes in AXES]
    ours = multilinear(AXES, values, where)
    for one, column in zip(ours, values, strict=True):
        theirs = RegularGridInterpolator(AXES, column)(np.stack(where, axis=-1))
        np.testing.assert_allclose(one, theirs, atol=1e-13)  # sums of 16 terms of size 1


def test_nodes_come_back_exactly_and_shapes_are_the_callers() -> None:
    values = np.arange(48.0).reshape(1, 4, 2, 3, 2)
    grid = np.meshgrid(*AXES, indexing="ij")
    np.testing.assert_array_equal(multilinear(AXES, values, grid)[0], values[0])
    assert multilinear(AXES, values, [1.0, 10.0, 0.0, 0.0]).shape == (1,)
    assert multilinear(AXES, values, [np.ones((2, 5)), 10.0, 0.0, 0.0]).shape == (1, 2, 5)
    assert multilinear(AXES, values, [np.empty(0), 10.0, 0.0, 0.0]).shape == (1, 0)


def test_outside_there_is_no_answer_and_one_node_answers_only_there() -> None:
    values = np.ones((1, 4, 2, 3, 2))
    altitudes = [-1e-3, 0.0, 3.5, 3.5 + 1e-3, np.nan]
    inside = np.isfinite(multilinear(AXES, values, [altitudes, 10.0, 0.0, 0.0])[0])
    assert inside.tolist() == [False, True, True, False, False]
    single = (AXES[0], np.array([7500.0]), np.array([0.1]), np.array([0.0]))
    ones = np.ones((1, 4, 1, 1, 1))
    # rounding of a unit or of a position, 1e-9 of the value, is no other value
    assert multilinear(single, ones, [1.0, 7500.0 * (1 + 1e-12), 0.1, 0.0]) == 1.0
    assert np.isnan(multilinear(single, ones, [1.0, 7501.0, 0.1, 0.0]))


def test_a_node_without_an_answer_counts_only_where_it_has_weight() -> None:
    values = np.ones((1, 4, 2, 3, 2))
    values[0, 3] = np.nan
    found = multilinear(AXES, values, [[2.0, 3.0, 3.2], 15.0, 0.05, 0.1])[0]
    assert np.isnan(found).tolist() == [False, False, True]


@pytest.mark.parametrize("name", sorted(SCALES))
@given(value=st.floats(1e-9, 1e9), speed=st.floats(1.0, 2e4), sign=st.sampled_from([1.0, -1.0]))
def test_every_scale_comes_back_and_rises(name: str, value: float, speed: float, sign: float) -> None:
    scale = SCALES[name]
    given_value = np.array([value if name == "logarithm" else sign * value])
    there = scale.to(given_value, np.array([speed]))
    np.testing.assert_allclose(scale.back(there, np.array([speed])), given_value, rtol=1e-12)
    assert scale.to(1.01 * np.abs(given_value), np.array([speed])) > scale.to(
        np.abs(given_value), np.array([speed])
    )


def test_a_flux_of_constant_coefficient_in_exponential_air_is_exact() -> None:
    """q = C exp(-h/H) V^3/2 is linear in h in its scale, whatever the steps; with either sign."""
    axes = (np.array([0.0, 60e3, 150e3]), np.array([2e3, 8e3]), np.zeros(1), np.zeros(1))
    scale = SCALES["logarithm-over-cube"]

    def flux(altitude: np.ndarray, speed: np.ndarray) -> np.ndarray:
        return np.exp(-altitude / 7e3) * 0.5 * speed**3

    nodes = scale.to(flux(axes[0][:, None], axes[1]), axes[1])[..., None, None]
    altitude, speed = np.array([10e3, 100e3]), np.array([3e3, 7e3])
    found = scale.back(multilinear(axes, nodes[None], [altitude, speed, 0.0, 0.0])[0], speed)
    np.testing.assert_allclose(found, flux(altitude, speed), rtol=1e-9)


def test_columns_find_their_scale() -> None:
    positive, signed = np.array([1.0, np.nan, 2.0]), np.array([-1.0, 2.0])
    assert scale_of("drag_coefficient", positive) == "linear"
    assert scale_of("knudsen.reference", positive) == "logarithm"
    assert scale_of("heat_flux_W_m2", signed) == "logarithm-over-cube"
    assert scale_of("heat_flux_radiative_W_m2", np.array([0.0, 1.0])) == "linear"


def test_mesh_and_cells() -> None:
    rows = mesh(AXES, slice(0, 48))
    whole = np.meshgrid(*AXES, indexing="ij")
    for one, other in zip(rows, whole, strict=True):
        np.testing.assert_array_equal(one, other.reshape(-1))
    assert [nodes.size for nodes in centres(AXES)] == [3, 1, 2, 1]
    pairs = face_pairs((AXES[0], np.array([5.0]), AXES[2], np.array([0.0])), (1, 0, 1, 0))
    assert [number for number, _ in pairs] == [0, 2]
    np.testing.assert_allclose(pairs[0][1], [[1.0, 5.0, 0.05, 0.0], [3.0, 5.0, 0.05, 0.0]])
