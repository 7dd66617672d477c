"""Every bridging function: published points, limits, monotonicity, derivatives; and the table of defaults."""

from __future__ import annotations

from types import SimpleNamespace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from aero.body import BODY_CLASSES, Sphere, Vehicle
from aero.bridge import (
    BRIDGES,
    DEFAULTS,
    SIMILARITY,
    Bridge,
    HeatBridge,
    blend,
    bridge_for,
    similarity_number,
)
from aero.errors import InputError

NAMES = sorted(BRIDGES)
NUMBERS = st.floats(-12.0, 12.0).map(lambda x: 10.0**x)
CENTRES = st.floats(1e-3, 10.0)
WIDTHS = st.floats(0.5, 8.0)


def test_sine_squared_is_the_published_formula():
    """sin^2(pi (3/8 + 1/8 log10 Kn)): 0.146 at 0.01, 0.5 at 0.1, 0.854 at 1 (printed to 3 digits)."""
    function = BRIDGES["sine-squared"]
    kn = np.array([1e-4, 1e-3, 0.01, 0.1, 1.0, 10.0, 100.0])
    ours = function(kn, function.centre, function.width).value
    np.testing.assert_allclose(ours, [0.0, 0.0, 0.146, 0.5, 0.854, 1.0, 1.0], atol=5e-4)
    inside = kn[1:6]
    theirs = np.sin(np.pi * (3 / 8 + np.log10(inside) / 8)) ** 2
    np.testing.assert_allclose(ours[1:6], theirs, atol=1e-15)


def test_erf_log_has_the_mid_slope_of_the_sine_squared_and_stays_near_it():
    """At centre 0.1 and width 8/pi the two differ by 0.03 at most (published comparison, 2 digits)."""
    kn = np.logspace(-5, 4, 2001)
    erf_log, sine = (BRIDGES[name](kn, 0.1, 8 / np.pi) for name in ("erf-log", "sine-squared"))
    assert np.abs(erf_log.value - sine.value).max() == pytest.approx(0.03, abs=5e-3)
    mid = np.argmin(np.abs(np.log10(kn) + 1))
    assert erf_log.slope[mid] == pytest.approx(sine.slope[mid], rel=1e-4)


@pytest.mark.parametrize("name", NAMES)
@given(number=NUMBERS, factor=st.floats(1.0, 1e3), centre=CENTRES, width=WIDTHS)
def test_between_zero_and_one_and_never_falling(name, number, factor, centre, width):
    low, high = BRIDGES[name](np.array([number, number * factor]), centre, width).value
    assert 0.0 <= low <= high <= 1.0


@pytest.mark.parametrize("name", NAMES)
def test_limits_and_shapes(name):
    function = BRIDGES[name]
    ends = function([0.0, 1e-30, 0.1, 1e30, np.inf, np.nan], 0.1, 2.5)
    np.testing.assert_allclose(ends.value[:5], [0.0, 0.0, 0.5, 1.0, 1.0], atol=1e-15)
    assert np.isnan(ends.value[5])
    for part in (ends.slope, ends.by_centre, ends.by_width):
        assert np.isfinite(part[:5]).all()
        assert part[[0, 1, 3, 4]] == pytest.approx(0.0)
    assert function(0.1, 0.1, 2.5).value.shape == ()
    assert function(np.empty(0), 0.1, 2.5).value.shape == (0,)
    assert function(np.ones((2, 3)), 0.1, 2.5).by_width.shape == (2, 3)
    with pytest.raises(ValueError, match="must be positive"):
        function(0.1, 0.0, 2.5)


@pytest.mark.parametrize("name", NAMES)
def test_derivatives_against_differences(name):
    function, step = BRIDGES[name], 1e-5
    x = np.logspace(-2.7, 0.7, 31)  # within the sine-squared's four decades, where it is smooth
    here = function(x, 0.1, 2.5)

    def difference(high, low):
        return (high.value - low.value) / (2 * step)

    by_number = difference(function(x * np.exp(step), 0.1, 2.5), function(x * np.exp(-step), 0.1, 2.5))
    by_centre = difference(function(x, 0.1 * 10**step, 2.5), function(x, 0.1 * 10**-step, 2.5))
    by_width = difference(function(x, 0.1, 2.5 + step), function(x, 0.1, 2.5 - step))
    np.testing.assert_allclose(here.slope, by_number, atol=1e-9)  # central differences: step squared
    np.testing.assert_allclose(here.by_centre, by_centre, atol=1e-9)
    np.testing.assert_allclose(here.by_width, by_width, atol=1e-9)


@given(c=st.floats(0.0, 5.0), f=st.floats(0.0, 5.0), share=st.floats(0.0, 1.0))
def test_blend_lies_between_its_limits(c, f, share):
    mixed = float(blend(c, f, share))
    assert min(c, f) - 1e-14 <= mixed <= max(c, f) + 1e-14


def test_blend_is_its_limit_where_the_other_has_no_answer():
    assert blend([1.0, np.nan], [np.nan, 2.0], [0.0, 1.0]).tolist() == [1.0, 2.0]
    assert np.isnan(blend(1.0, np.nan, 0.5))


def test_every_body_class_has_every_coefficient_with_a_source():
    for body in BODY_CLASSES:
        for coefficient in ("drag", "lift", "heating"):
            row = DEFAULTS[body, coefficient]
            assert row.source
            if isinstance(row, Bridge):
                assert row.function in BRIDGES
                assert row.similarity in SIMILARITY
                assert row.centre_sigma > 0.0
                assert row.width_sigma > 0.0
            else:
                assert isinstance(row, HeatBridge)


def body(body_class="sphere", **bridging):
    return SimpleNamespace(body_class=body_class, bridging=bridging, source="capsule.toml")


def test_a_vehicle_takes_its_row_and_its_own_values():
    ball = Vehicle.from_shape(Sphere(diameter=1.0))
    assert bridge_for(ball, "drag") == DEFAULTS["sphere", "drag"]
    assert bridge_for(ball, "heating") == DEFAULTS["sphere", "heating"]
    own = bridge_for(body(drag={"centre": 0.2, "width": 2.0}), "drag")
    assert (own.centre, own.width, own.function) == (0.2, 2.0, "erf-log")
    assert own.width_sigma == pytest.approx(0.4)  # 20 % of the new width
    assert own.source.startswith("the vehicle's own centre, width;")
    assert bridge_for(body(heating={"exponent": 3.0}), "heating").exponent == 3.0


def test_another_function_brings_its_published_parameters():
    own = bridge_for(body("slender", drag={"function": "sine-squared"}), "drag")
    assert (own.centre, own.width) == (0.1, 8 / np.pi)


def test_without_a_shape_the_widest_row_is_taken():
    assert bridge_for(body(None), "drag") == DEFAULTS["no-shape", "drag"]


@pytest.mark.parametrize(
    ("given_values", "message"),
    [
        (
            {"function": "erf"},
            r"capsule.toml: \[bridging.drag\]: function is 'erf', expected one of: erf-log",
        ),
        ({"variable": "mach"}, "variable is 'mach', expected one of: knudsen"),
        ({"variable": "cheng"}, "without a centre"),
        ({"center": 0.1}, "has no key 'center'; did you mean 'centre'"),
        ({"centre": "0.1"}, "centre is '0.1', expected a number"),
        ({"width": 0.0}, "width is 0.0, expected a positive number"),
        ({"centre_sigma": -1.0}, "centre_sigma is -1.0"),
        ({"centre": float("nan")}, "centre is nan, expected a number"),
        ({"centre": True}, "centre is True, expected a number"),
    ],
)
def test_bad_values_are_named_with_their_place(given_values, message):
    with pytest.raises(InputError, match=message):
        bridge_for(body(drag=given_values), "drag")


def test_unknown_coefficient_or_class_is_a_wrong_call():
    with pytest.raises(ValueError, match="no bridge for 'moment' of 'sphere'"):
        bridge_for(body(), "moment")
    with pytest.raises(ValueError, match="body classes: blunt-cone"):
        bridge_for(body("torus"), "drag")


def test_a_bridge_in_stagnation_reynolds_number_runs_the_other_way():
    own = bridge_for(body(drag={"variable": "reynolds_stagnation", "centre": 10.0}), "drag")
    fraction = own([1e-9, 10.0, 1e9])
    np.testing.assert_allclose(fraction.value, [1.0, 0.5, 0.0], atol=1e-6)
    assert (fraction.slope >= 0.0).all()
    assert own.over_centre(5.0) == 2.0
    assert own(0.0).value == 1.0  # no gas at all


def test_similarity_numbers_are_picked_by_name():
    assert similarity_number("cheng", knudsen=1.0, cheng=2.0) == 2.0
    with pytest.raises(ValueError, match="'cheng', which was not given"):
        similarity_number("cheng", knudsen=1.0)
    with pytest.raises(ValueError, match="similarity is 'mach'"):
        similarity_number("mach", knudsen=1.0)
