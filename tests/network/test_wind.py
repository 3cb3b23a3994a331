"""The outside of a box in wind: nothing of it in still air, and written down independently."""

from itertools import pairwise

import numpy as np
import pytest
from support.cases import COARSE, board, box, case_of, network_of, part, patched, solved

from enclosure_check.network.build import build_network
from enclosure_check.network.films import BoxFilm
from enclosure_check.network.network import Network
from enclosure_check.network.wind import BoxFilmInWind
from enclosure_check.physics.air import air, pressure_at_altitude
from enclosure_check.physics.box import FACES, box_film, box_geometry

WARM = box(
    boards={"main": board(other_power_w=4)},
    parts={"U1": part(power_w=2, theta_jb_k_per_w=3)},
    walls={
        "back": {"mounting": {"kind": "against_surface", "gap_mm": 12}},
        "bottom": {"mounting": {"kind": "insulated"}},
    },
    surroundings={"altitude_m": 1500},
)


def in_wind(speed: float, side: str = "any", document=WARM):
    return patched(document, {"surroundings": {"wind_m_per_s": speed, "wind_from": side}})


def outside(network: Network) -> BoxFilm:
    (kind,) = [kind for kind in network.kinds if isinstance(kind, BoxFilm)]
    return kind


def states(variants: int) -> np.ndarray:
    """Rises of the six faces and of the air, both signs."""
    rise = np.random.default_rng(3).uniform(-15, 40, (7, variants))
    rise[6] = 0.0
    return rise


REFERENCE_K = np.array([298.15])


@pytest.mark.parametrize("changes", [{"wind_m_per_s": 0}, {"wind_m_per_s": 0, "wind_from": "left"}])
def test_no_wind_is_free_convection_to_the_last_digit(changes):
    still, none = solved(WARM), solved(patched(WARM, {"surroundings": changes}))
    assert type(outside(none.network)) is BoxFilm
    assert (still.solution.rise == none.solution.rise).all()


def test_still_air_is_the_limit_of_weak_wind():
    still, weak = outside(network_of(WARM)), outside(network_of(in_wind(1e-8)))
    rise = states(20)
    free = still.films(rise, REFERENCE_K)
    # The law of the wind gives less than 0.001 of the free film there, and its third power counts.
    np.testing.assert_allclose(weak.films(rise, REFERENCE_K), free, rtol=1e-9)


@pytest.mark.parametrize("side", ["any", *FACES[:3], "top"])
def test_wind_never_lessens_a_film_and_more_of_it_less_so(side):
    rise = states(30)
    speeds = (0.01, 0.1, 0.5, 2.0, 2.01, 10.0, 60.0)
    documents = [WARM, *(in_wind(speed, side) for speed in speeds)]
    films = [outside(network_of(each)).films(rise, REFERENCE_K) for each in documents]
    is_open = outside(network_of(WARM)).geometry.open_faces
    assert is_open.tolist() == [True, True, True, False, False, True]
    for less, more in pairwise(films):
        assert (more[is_open] > less[is_open]).all()
        assert (more[~is_open] == 0).all()


LENGTHS = {
    # Outside 204 x 104 x 154 mm: left and right, front, top.
    "any": (154, 204, 204),
    "left": (104, 204, 204),
    "front": (104, 154, 104),
    "top": (154, 154, 104),
}


@pytest.mark.parametrize("side", LENGTHS)
def test_films_written_down_independently(side):
    case = case_of(in_wind(1.3, side))
    network = build_network(case, COARSE)
    kind, rise = outside(network), states(1)
    found = kind.films(rise, network.reference_k)[:, 0]
    air_k, pressure = float(network.reference_k[0]), float(pressure_at_altitude(1500))
    shape = box_geometry(np.array(case.outside_mm) / 1e3, case.up, kind.geometry.open_faces)
    free = box_film(rise[:6, 0] + air_k, air_k, pressure, shape).coefficient
    sides, front, top = LENGTHS[side]
    for face, length in ((0, sides), (1, sides), (2, front), (5, top)):
        at = air(air_k + rise[face, 0] / 2, pressure)
        reynolds = 1.3 * length / 1e3 / float(at.kinematic_viscosity)
        assert reynolds < 5e5
        nusselt = 0.664 * reynolds**0.5 * float(at.prandtl) ** (1 / 3)
        forced = nusselt * float(at.conductivity) * 1e3 / length
        assert found[face] == pytest.approx((free[face] ** 3 + forced**3) ** (1 / 3), rel=1e-12)


def test_walls_across_a_gap_keep_their_still_gap():
    still, windy = solved(WARM, COARSE), solved(in_wind(5.0), COARSE)
    for answer in (still, windy):
        assert answer.flow("wall:bottom", "convection_outside") == 0
    # A cooler wall gives less to its gap.
    assert windy.flow("wall:back", "convection_outside") < still.flow(
        "wall:back", "convection_outside"
    )


def test_more_wind_cools_every_wall_and_part():
    answers = [solved(in_wind(speed), COARSE) for speed in (0, 0.1, 1, 4, 30)]
    for less, more in pairwise(answers):
        places = less.network.places
        nodes = [plate.mean for plate in places.wall_outside.values()]
        nodes += [places.boards["main"].mean, places.parts["U1"].junction]
        assert (more.solution.rise[nodes] < less.solution.rise[nodes]).all()
    still, far = answers[0], answers[-1]
    top = far.network.places.wall_outside["top"].mean
    # A film some ten times as high as the free one and the radiation together.
    assert 0 < far.solution.rise[top, 0] < 0.25 * still.solution.rise[top, 0]


def test_wind_warms_a_box_that_is_colder_than_the_air():
    night = {"surroundings": {"sky": "given", "sky_c": -30}}
    off = patched(box(), night)
    still, windy = solved(off, COARSE), solved(in_wind(3.0, document=off), COARSE)
    top = still.network.places.wall_outside["top"].mean
    assert still.solution.rise[top, 0] < windy.solution.rise[top, 0] < 0


@pytest.mark.parametrize("name", ["factor", "wind_factor"])
def test_factors_by_variant(name):
    """A column of factors per variant gives what each column gives alone."""
    network = network_of(in_wind(0.5), COARSE)
    kind = outside(network)
    assert isinstance(kind, BoxFilmInWind)
    factors = np.array([0.7, 1.0, 1.4])[None, :] * np.linspace(0.9, 1.1, 6)[:, None]
    rise = np.random.default_rng(5).uniform(-5, 30, (network.size, 3))
    reference = np.repeat(network.reference_k, 3)
    together = kind.with_parameter(name, factors)
    heat, slopes = together.evaluate(rise, reference), together.slopes(rise, reference)
    for v in range(3):
        alone = kind.with_parameter(name, factors[:, v : v + 1])
        own = rise[:, v : v + 1]
        np.testing.assert_allclose(heat[:, v], alone.evaluate(own, reference[:1])[:, 0], rtol=1e-12)
        np.testing.assert_allclose(
            slopes[:, v], alone.slopes(own, reference[:1])[:, 0], rtol=1e-12, atol=1e-12
        )
    assert not np.allclose(heat, kind.evaluate(rise, reference))
