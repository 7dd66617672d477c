"""Tags, and the shape-preserving cubic between samples against a reference library."""

from __future__ import annotations

import itertools

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from hypothesis.extra.numpy import arrays
from scipy.integrate import quad
from scipy.interpolate import PchipInterpolator

import aero
from aero.air.cubic import monotone_slopes
from aero.errors import InputError
from aero.regime import REGIMES, check_bounds, regime, regime_index
from aero.regime.track import Cubic


def test_a_value_on_a_bound_belongs_to_the_more_rarefied_side() -> None:
    assert regime([0.01, 0.1, 10.0]).tolist() == ["slip", "transitional", "free-molecular"]
    assert regime(np.nextafter([0.01, 0.1, 10.0], 0.0)).tolist() == ["continuum", "slip", "transitional"]
    assert regime([np.nan]).tolist() == [""]
    assert regime([]).shape == (0,)


def test_the_package_and_its_function_share_a_name() -> None:
    assert aero.regime(0.05) == "slip"  # called as a function
    assert aero.regime.REGIMES == REGIMES  # and still a package


@pytest.mark.parametrize(
    "bounds", [(0.1, 0.01, 10), (0.0, 0.1, 10), (0.1, 0.1, 10), (0.1, 10), (0.01, 0.1, np.inf)]
)
def test_bounds_that_cannot_be(bounds: tuple[float, ...]) -> None:
    with pytest.raises(InputError, match="three ascending positive"):
        check_bounds(bounds)


@given(st.floats(1e-9, 1e9))
def test_tags_ascend_with_the_knudsen_number(kn: float) -> None:
    assert regime_index(kn) <= regime_index(kn * 2.0)


steps = arrays(np.float64, st.integers(3, 12), elements=st.floats(1e-3, 1e3))


@given(steps, st.data())
def test_slopes_equal_those_of_a_reference_library(step: np.ndarray, data: st.DataObject) -> None:
    # scipy.interpolate.PchipInterpolator (Fritsch & Butland 1984), a general-purpose reference library
    time = np.cumsum(step)
    values = data.draw(arrays(np.float64, time.size, elements=st.integers(-1000, 1000).map(float)))
    reference = PchipInterpolator(time, values)
    ours = Cubic(time, values)
    scale = 1e-9 * (1.0 + np.abs(np.diff(values) / np.diff(time)).max())
    np.testing.assert_allclose(monotone_slopes(time, values), reference(time, 1), rtol=1e-9, atol=scale)
    when = np.linspace(time[0], time[-1], 50)
    np.testing.assert_allclose(ours(when), reference(when), rtol=1e-9, atol=1e-9 * (1 + np.abs(values).max()))


def test_two_samples_make_a_straight_line() -> None:
    line = Cubic(np.array([0.0, 2.0]), np.array([1.0, 5.0]))
    np.testing.assert_allclose(line(np.array([0.0, 0.5, 2.0])), [1.0, 2.0, 5.0])


def test_the_integral_is_that_of_the_cubic() -> None:
    time = np.array([0.0, 1.0, 2.5, 4.0, 7.0])
    rate = Cubic(time, np.array([0.0, 3.0, 2.0, 5.0, 5.0]))
    running = rate.running_integral()
    for end in (0.3, 1.0, 3.3, 7.0):
        # quadrature piece by piece: an independent route
        cuts = [0.0, *time[(time > 0) & (time < end)], end]
        expected = sum(quad(lambda t: float(rate(np.array(t))), a, b)[0] for a, b in itertools.pairwise(cuts))
        assert rate.integral(np.array(end), running) == pytest.approx(expected, rel=1e-12)


def test_no_hump_on_a_staircase() -> None:
    time = np.arange(8.0)
    stairs = np.array([0, 0, 0, 1, 1, 1, 2, 2], dtype=float)
    between = Cubic(time, stairs)(np.linspace(0, 7, 701))
    assert between.min() == 0.0
    assert between.max() == 2.0
    assert np.all(np.diff(between) >= 0.0)
