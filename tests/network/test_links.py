"""Every kind of link against five-point differences of its own heat, and against itself.

The links are those of random documents, so that their parameters are ones that occur.
"""

import random
from collections.abc import Iterator

import numpy as np
import pytest
from support.cases import network_of
from support.random_documents import random_document

from enclosure_check.network.links import (
    BodyFilm,
    BoxFilm,
    Conduction,
    LinkKind,
    PlateFilm,
    Radiation,
)

KINDS = (Conduction, Radiation, PlateFilm, BodyFilm, BoxFilm)
# All of them tilted, so that every film has both parts of its law.
SEEDS = (12, 19, 53)
REFERENCE_K = np.array([253.15, 298.15, 340.15])

# The film laws are differenced one-sidedly over 1e-4 K and so are off by half of that times their
# curvature: 1e-4 of the slope at differences of a kelvin and more, which these states have.
SLOPE_TOLERANCE = 2e-4
# Steps of the five-point differences: far above rounding, and fourth order.
STEP_K, STEP_SHARE = 0.02, 1e-3


def networks():
    return [network_of(random_document(random.Random(seed))) for seed in SEEDS]


def links() -> Iterator[LinkKind]:
    for network in networks():
        yield from network.kinds


def cases() -> list[LinkKind]:
    found = [kind for kind in links() if isinstance(kind, KINDS)]
    assert {type(kind) for kind in found} == set(KINDS)
    return found


CASES = cases()
IDS = [f"{type(kind).__name__}-{index}" for index, kind in enumerate(CASES)]
every_kind = pytest.mark.parametrize("kind", CASES, ids=IDS)


def states(kind: LinkKind, variants: int, seed: int = 1) -> np.ndarray:
    """Rises of the stencil's nodes: of both signs, and differing by a kelvin and more."""
    rng = np.random.default_rng(seed)
    k, m = kind.stencil.shape
    steps = rng.uniform(1.5, 25.0, size=(k, m, variants))
    rise = np.cumsum(steps, axis=0)
    rise = rng.permuted(rise, axis=0) - rise.mean(axis=0) + rng.uniform(-20, 20, (m, variants))
    if isinstance(kind, BoxFilm):
        # All six links share one stencil.
        rise = np.repeat(rise[:, :1], m, axis=1)
    return rise


def five_point(function, step):
    """Fourth-order central difference of ``function`` of a shift."""
    return (8 * (function(step) - function(-step)) - (function(2 * step) - function(-2 * step))) / (
        12 * step
    )


def assert_close(found, expected, share=SLOPE_TOLERANCE):
    assert found.shape == expected.shape
    assert np.isfinite(found).all()
    size = np.abs(expected).max(axis=0, keepdims=True) + 1e-12
    assert (np.abs(found - expected) / size).max() < share


@every_kind
@pytest.mark.parametrize("variants", [1, 3])
def test_derivative_by_every_temperature(kind, variants):
    rise = states(kind, variants)
    reference = REFERENCE_K[:variants]
    found = kind.heat_by_rise(rise, reference)
    assert found.shape == rise.shape

    def shifted(node):
        def heat(step):
            moved = rise.copy()
            moved[node] += step
            return kind.heat(moved, reference)

        return heat

    expected = np.stack([five_point(shifted(node), STEP_K) for node in range(len(rise))])
    assert_close(found, expected)


@every_kind
@pytest.mark.parametrize("variants", [1, 3])
def test_derivative_by_every_parameter(kind, variants):
    rise = states(kind, variants, seed=2)
    reference = REFERENCE_K[:variants]
    for name in kind.PARAMETERS:
        value = getattr(kind, name)
        step = STEP_SHARE * np.maximum(np.abs(value), 1e-3)
        # At the ends of its range a cosine has no two-sided derivative.
        inside = np.ones(value.shape, dtype=bool)
        if name == "up_cosine":
            inside = (np.abs(value) < 0.99) & (np.abs(value) > 0.01)

        def heat(shift, name=name, value=value):
            return kind.with_parameter(name, value + shift).heat(rise, reference)

        expected = np.where(inside, five_point(heat, step), 0.0)
        found = np.where(inside, kind.heat_by_parameter(rise, reference, name), 0.0)
        scale = np.abs(expected).max()
        assert scale > 0, name
        assert np.isfinite(found).all(), name
        assert np.abs(found - expected).max() < SLOPE_TOLERANCE * scale, name


def test_every_parameter_is_reached():
    """What the parameters are is part of the contract; a new one must come with its test."""
    assert {kind.__name__: kind.PARAMETERS for kind in KINDS} == {
        "Conduction": ("conductance",),
        "Radiation": ("area", "exchange_area", "share", "emissivity"),
        "PlateFilm": ("area", "factor", "fall_length", "area_perimeter_length", "up_cosine"),
        "BodyFilm": ("area", "factor", "body_area", "gravity_function"),
        "BoxFilm": ("factor",),
    }


@every_kind
def test_no_difference_no_heat(kind):
    for level in (-40.0, 0.0, 1e-7, 55.0):
        rise = np.full((*kind.stencil.shape, 3), level)
        assert (kind.heat(rise, REFERENCE_K) == 0.0).all()


@every_kind
def test_heat_goes_from_warm_to_cold_and_turns_with_the_difference(kind):
    rise = states(kind, 3, seed=4)
    ends_a, ends_b = (rise[0], rise[1]) if len(rise) == 2 else (rise[:6, 0], rise[6, 0])
    heat = kind.heat(rise, REFERENCE_K)
    assert (heat * (ends_a - ends_b) >= 0).all()
    assert heat.any()


@every_kind
def test_slopes_stay_finite_where_the_difference_vanishes(kind):
    for level in (0.0, 1e-9, 1e-3, 0.02):
        rise = np.zeros((*kind.stencil.shape, 1))
        rise[0] = level
        slope = kind.heat_by_rise(rise, REFERENCE_K[:1])
        assert np.isfinite(slope).all()
        assert (np.abs(slope) < 1e9).all()


@every_kind
def test_variants_together_are_the_variants_alone(kind):
    rise = states(kind, 3, seed=5)
    together, slopes = kind.heat(rise, REFERENCE_K), kind.heat_by_rise(rise, REFERENCE_K)
    for index in range(3):
        alone, reference = rise[:, :, index : index + 1], REFERENCE_K[index : index + 1]
        # Rounding of the last digits may differ with the length of an array.
        np.testing.assert_allclose(
            together[:, index : index + 1], kind.heat(alone, reference), rtol=1e-13, atol=0
        )
        np.testing.assert_allclose(
            slopes[:, :, index : index + 1],
            kind.heat_by_rise(alone, reference),
            rtol=1e-7,
            atol=1e-9 * np.abs(slopes).max(),
        )


@every_kind
def test_parameters_that_differ_by_variant(kind):
    rise = states(kind, 3, seed=6)
    factors = np.array([0.8, 1.0, 1.1])
    for name in kind.PARAMETERS:
        if name == "up_cosine":
            factors = np.array([-0.5, 0.2, 0.9])
        value = getattr(kind, name) * factors
        together = kind.with_parameter(name, value)
        slopes = together.heat_by_rise(rise, REFERENCE_K)
        by_parameter = together.heat_by_parameter(rise, REFERENCE_K, name)
        for index in range(3):
            alone = kind.with_parameter(name, value[:, index : index + 1])
            one, reference = rise[:, :, index : index + 1], REFERENCE_K[index : index + 1]
            np.testing.assert_allclose(
                together.heat(rise, REFERENCE_K)[:, index : index + 1],
                alone.heat(one, reference),
                rtol=1e-13,
                atol=0,
            )
            np.testing.assert_allclose(
                slopes[:, :, index : index + 1],
                alone.heat_by_rise(one, reference),
                rtol=1e-7,
                atol=1e-9 * np.abs(slopes).max(),
            )
            expected = alone.heat_by_parameter(one, reference, name)
            np.testing.assert_allclose(
                by_parameter[:, index : index + 1],
                expected,
                rtol=1e-6,
                atol=1e-7 * np.abs(by_parameter).max(),
            )
        first = together.first_variant()
        assert getattr(first, name).tolist() == value[:, :1].tolist()
        assert kind.first_variant() is kind


@every_kind
def test_a_parameter_that_does_not_exist(kind):
    rise = states(kind, 1)
    with pytest.raises(KeyError, match="colour"):
        kind.with_parameter("colour", np.ones((1, 1)))
    with pytest.raises((KeyError, AttributeError), match="colour"):
        kind.heat_by_parameter(rise, REFERENCE_K[:1], "colour")


def test_faces_that_are_not_open_carry_no_heat():
    closed = 0
    for kind in CASES:
        if isinstance(kind, BoxFilm):
            heat = kind.heat(states(kind, 2), REFERENCE_K[:2])
            assert (heat[~kind.geometry.open_faces] == 0).all()
            assert (heat[kind.geometry.open_faces] != 0).all()
            closed += int((~kind.geometry.open_faces).sum())
    assert closed > 0


def test_radiation_vanishes_with_the_emissivity():
    for kind in CASES:
        if isinstance(kind, Radiation):
            dark = kind.with_parameter("emissivity", np.zeros_like(kind.emissivity))
            assert (dark.heat(states(kind, 2), REFERENCE_K[:2]) == 0).all()
