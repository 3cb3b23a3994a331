"""Regularisation: exact at zero, bounded error away from it."""

import numpy as np
import pytest

from enclosure_check.physics.smooth import (
    RISE_WIDTH_K,
    smoothstep,
    soft_abs,
    soft_rise,
    soft_sign,
)

X = np.concatenate([-np.logspace(2, -8, 200), [0.0], np.logspace(-8, 2, 200)])
ROUNDING = 1e-15


def test_soft_abs_bounds():
    y = soft_abs(X, 0.1)
    np.testing.assert_allclose(y, soft_abs(-X, 0.1), rtol=0, atol=0)
    assert soft_abs(0.0, 0.1) == pytest.approx(0.1)
    excess = y - np.abs(X)
    assert (excess >= 0).all()
    away = np.abs(X) > 0.1
    assert (excess[away] <= 0.01 / (2 * np.abs(X[away])) + 1e-14).all()


def test_soft_sign_is_odd_and_bounded():
    y = soft_sign(X, 0.1)
    np.testing.assert_allclose(y, -soft_sign(-X, 0.1), rtol=0, atol=0)
    away = np.abs(X) > 0.5
    assert (np.abs(y - np.sign(X))[away] <= 0.01 / (2 * X[away] ** 2)).all()
    assert (np.diff(y) >= 0).all()


def test_soft_rise_keeps_its_promises():
    y = soft_rise(X)
    assert soft_rise(0.0) == 0.0
    np.testing.assert_allclose(y, soft_rise(-X), rtol=0, atol=0)
    positive = X > 0
    assert (np.diff(y[positive]) > 0).all()
    away = np.abs(X) >= 10 * RISE_WIDTH_K
    error = 1 - y[away] / np.abs(X[away])
    assert (error >= -ROUNDING).all()
    assert (error <= 3.5 * (RISE_WIDTH_K / X[away]) ** 2 + ROUNDING).all()
    # The film coefficient goes with the fourth root: below 1 % at ten widths, 0.01 % at a hundred.
    root_error = 1 - (soft_rise([0.1, 1.0]) / [0.1, 1.0]) ** 0.25
    assert root_error[0] < 0.01
    assert root_error[1] < 1e-4


def test_fourth_root_of_soft_rise_has_a_bounded_slope():
    x = np.linspace(-0.05, 0.05, 20001)
    slope = np.gradient(soft_rise(x) ** 0.25, x)
    unregularised = np.gradient(np.abs(x) ** 0.25, x)
    # With x in units of the width the slope is that of x^2 / (1 + x^2)^(7/8), below 1.
    assert np.abs(slope).max() < RISE_WIDTH_K**-0.75
    assert np.abs(unregularised).max() > 10 * RISE_WIDTH_K**-0.75
    assert abs(slope[10000]) < 1e-9


def test_smoothstep():
    x = np.linspace(-1, 2, 301)
    y = smoothstep(x)
    assert (y[x <= 0] == 0).all()
    assert (y[x >= 1] == 1).all()
    assert smoothstep(0.5) == pytest.approx(0.5)
    assert (np.diff(y) >= 0).all()
    assert abs(smoothstep(1e-6)) < 1e-11
    assert abs(1 - smoothstep(1 - 1e-6)) < 1e-11
