"""Free convection inside a box: films in stratified air, narrow gaps, rising and falling streams.

The air away from the films is stratified along gravity. A film takes heat up (or gives it up) at
its own height, its stream carries the heat on and lets it go where the air is as warm as the
stream. Where two faces lie close, part of their heat goes straight across.

Against the numerical experiments made for this project (sealed boxes with one board, laminar):
totals within 7 %, shares of the walls within 0.08. The cases were seen while the form was chosen.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
import numpy.typing as npt
from numpy.typing import ArrayLike

from enclosure_check.physics.air import GRAVITY, air
from enclosure_check.physics.smooth import soft_abs, soft_sign

FloatArray = npt.NDArray[np.float64]

# Chen & Eichhorn: see `stratified_factor`.
STRATIFIED_EXPONENT = 0.38
LARGEST_STRATIFICATION = 4.0
# Excess of a laminar film's mixed temperature over the air, as a share of that of its wall:
# int f' theta / int f' of Ostrach's similarity solution at Pr 0.71 (0.391); Squire's integral
# profile gives 0.40.
MIXED_EXCESS = 0.39
# Rounding of a step of the air's profile, and of a difference of temperatures. [K]
STEP_WIDTH_K = 0.1
DIFFERENCE_WIDTH_K = 0.01
# Rounding of the change from the shelter of a warm face to that of a cold one. It is wider, as what
# goes straight across a gap follows the film where its face is as warm as the air. [K]
SIGN_WIDTH_K = 0.2
# Rounding of the change from the level law of a warm face to that of a cold one. [K]
LEVEL_WIDTH_K = 0.05
# Edges of a film in a corner, 2 (1 - 0.54 / 2): see `corner_factor`.
CORNER = 1.46
# Decay of the excess of a laminar plume above its source: plane 3/5, axisymmetric 1 (from memory).
PLANE_DECAY, ROUND_DECAY = 0.6, 0.4
# Parallel channel, symmetric: Bar-Cohen & Rohsenow's two constants.
CHANNEL_DEVELOPED, CHANNEL_PLATE = 576.0, 2.873
# Counterflow of two unlike faces: each half a channel of half the width and excess, (1/2)^4.
OPPOSED_SHARE = 1.0 / 16.0
# Sharpness of the larger of conduction across and film.
GAP_EXPONENT = 10.0


def stratified_factor(stratification: ArrayLike) -> FloatArray:
    """Factor on the film of an upright face in air that warms upwards.

    ``(1 + S)^0.38``, S the rise of the air over the height of the face over the mean difference
    between face and air; S is taken as 4 at most.

    Parameters
    ----------
    stratification : array_like
        S [-], zero or above.

    Returns
    -------
    ndarray
        Factor [-], same shape.

    Notes
    -----
    Range S up to 2 (from memory); between 2 and 4 extrapolated. An integral solution of the laminar
    film at Pr 0.71 gives 1.08, 1.15, 1.30, 1.43, 1.52 at S 0.25, 0.5, 1, 1.5, 1.9: within 2 %.

    References
    ----------
    C. C. Chen, R. Eichhorn, "Natural convection from a vertical surface to a thermally stratified
    fluid", Journal of Heat Transfer 98, 1976, 446-451 (form and constants from memory).
    """
    s = np.minimum(np.asarray(stratification, dtype=np.float64), LARGEST_STRATIFICATION)
    return np.asarray((1.0 + s) ** STRATIFIED_EXPONENT)


def corner_factor(
    coefficient: ArrayLike, conductivity: ArrayLike, edge_a: ArrayLike, edge_b: ArrayLike
) -> FloatArray:
    """Share of a wall's film that its corners with other walls leave.

    ``1 / ((1 + 1.46 k/(h a)) (1 + 1.46 k/(h b)))``: in the corner of two walls the two films are
    one; an edge adds 0.54 thicknesses to the shape factor of a layer k/h thick where two separate
    layers would count a whole one each.

    Parameters
    ----------
    coefficient : array_like
        Film coefficient [W/(m2 K)].
    conductivity : array_like
        Conductivity of the air [W/(m K)].
    edge_a, edge_b : array_like
        Edges of the wall [m]; infinite for a face without corners.

    Returns
    -------
    ndarray
        Factor [-], broadcast shape.

    References
    ----------
    Edge of a layer: I. Langmuir, E. Q. Adams, G. S. Meikle, "Flow of heat through furnace walls:
    the shape factor", Trans. American Electrochemical Society 24, 1913 (from memory). Its use for
    the corner of two films is ours.
    """
    thickness = CORNER * np.asarray(conductivity) / np.asarray(coefficient, dtype=np.float64)
    a, b = np.asarray(edge_a, dtype=np.float64), np.asarray(edge_b, dtype=np.float64)
    return np.asarray(1.0 / ((1.0 + thickness / a) * (1.0 + thickness / b)))


def closed_cavity(rayleigh: ArrayLike, aspect: ArrayLike, heated_below: ArrayLike) -> FloatArray:
    """Nusselt number straight across a gap with closed edges, at any tilt.

    Upright: the largest of ``0.0605 Ra^(1/3)``,
    ``(1 + (0.104 Ra^0.293 / (1 + (6310/Ra)^1.36))^3)^(1/3)`` and ``0.242 (Ra/A)^0.272`` (ElSherbiny
    et al.). Heated below, to 60 degrees from level, with ``R = Ra cos t``:
    ``1 + 1.44 (1 - 1708/R)+ (1 - 1708 sin(1.8 t)^1.6 / R)+ + ((R/5830)^(1/3) - 1)+`` (Hollands et
    al.); linear between 60 and 90 degrees. Heated above: ``1 + (Nu_upright - 1) sin t``.

    Parameters
    ----------
    rayleigh : array_like
        Rayleigh number with the width of the gap and the difference of its faces [-].
    aspect : array_like
        Length along gravity over width [-].
    heated_below : array_like
        Cosine of the tilt: 1 heated from below, 0 upright, -1 heated from above [-].

    Returns
    -------
    ndarray
        Nusselt number with the width, 1 for conduction [-], broadcast shape.

    Notes
    -----
    ElSherbiny: aspect 5 to 110, Ra 100 to 2e7; Hollands: Ra to 1e7 (from memory). Aspects below 1
    are taken as 1.

    References
    ----------
    S. M. ElSherbiny, G. D. Raithby, K. G. T. Hollands, "Heat transfer by natural convection across
    vertical and inclined air layers", Journal of Heat Transfer 104, 1982, 96-102. K. G. T.
    Hollands, T. E. Unny, G. D. Raithby, L. Konicek, "Free convective heat transfer across inclined
    air layers", Journal of Heat Transfer 98, 1976, 189-193. Heated above: the straight-line rule of
    the same school (from memory).
    """
    ra = np.maximum(np.asarray(rayleigh, dtype=np.float64), 1e-9)
    c = np.clip(np.asarray(heated_below, dtype=np.float64), -1.0, 1.0)
    a = np.maximum(np.asarray(aspect, dtype=np.float64), 1.0)
    middle = 0.104 * ra**0.293 / (1.0 + (6310.0 / ra) ** 1.36)
    upright = np.maximum(
        np.maximum(0.0605 * np.cbrt(ra), np.cbrt(1.0 + middle * middle * middle)),
        0.242 * (ra / a) ** 0.272,
    )
    tilted = np.maximum(c, 0.5)
    angle = np.arccos(tilted)
    r = ra * tilted
    beyond = np.maximum(1.0 - 1708.0 / r, 0.0)
    waves = np.maximum(1.0 - 1708.0 * np.maximum(np.sin(1.8 * angle), 0.0) ** 1.6 / r, 0.0)
    below = 1.0 + 1.44 * beyond * waves + np.maximum(np.cbrt(r / 5830.0) - 1.0, 0.0)
    steep = np.clip((np.degrees(np.arccos(np.maximum(c, 0.0))) - 60.0) / 30.0, 0.0, 1.0)
    above = 1.0 + (upright - 1.0) * np.sqrt(np.maximum(1.0 - c * c, 0.0))
    return np.asarray(np.where(c >= 0.0, below + (upright - below) * steep, above))


def channel_share(
    drive: ArrayLike, per_volume: ArrayLike, width: ArrayLike, length: ArrayLike, gravity: ArrayLike
) -> FloatArray:
    """Share of its free film that a face keeps to the air outside a gap with open edges.

    ``(1 + (576/2.873) El^(-3/2))^(-1/2)``: the ratio of Bar-Cohen & Rohsenow's channel of two
    symmetric isothermal plates to the same two plates far apart. Goes to nothing in a narrow gap
    and to one in a wide one.

    Parameters
    ----------
    drive : array_like
        Difference between faces and air that drives the flow [K], see `channel_drive`.
    per_volume : array_like
        ``g beta / (nu alpha)`` of the air [1/(K m3)].
    width, length : array_like
        Width of the gap and its length along the flow [m].
    gravity : array_like
        Share of gravity along the flow [-].

    Returns
    -------
    ndarray
        Share between 0 and 1 [-], broadcast shape.

    References
    ----------
    A. Bar-Cohen, W. M. Rohsenow, "Thermally optimum spacing of vertical, natural convection cooled,
    parallel plates", Journal of Heat Transfer 106, 1984, 116-123.
    """
    w = np.asarray(width, dtype=np.float64)
    volume = w * w * w * (w / np.asarray(length, dtype=np.float64)) * np.asarray(gravity)
    elenbaas = np.asarray(per_volume, dtype=np.float64) * np.asarray(drive) * volume
    ratio = CHANNEL_DEVELOPED / CHANNEL_PLATE
    return np.asarray(1.0 / np.sqrt(1.0 + ratio * np.maximum(elenbaas, 1e-12) ** -1.5))


def channel_drive(difference_a: ArrayLike, difference_b: ArrayLike) -> FloatArray:
    """Difference to the air outside that drives the flow through a gap of two unlike faces.

    ``sqrt(mean^2 + (half difference / 16)^2)``: like faces drive a channel with their mean; unlike
    ones a counterflow, each half a channel of half the width and half the excess. Their sum would
    have a corner where faces lie as far above as below the air, sharp beside the differences
    there; joining them is ours, and lies below the sum by 29 % at most, where both are the same.

    Parameters
    ----------
    difference_a, difference_b : array_like
        Face minus outside air [K].

    Returns
    -------
    ndarray
        Drive [K], above zero, broadcast shape.
    """
    a, b = np.asarray(difference_a, dtype=np.float64), np.asarray(difference_b, dtype=np.float64)
    opposed = OPPOSED_SHARE * 0.5 * (a - b)
    return np.hypot(soft_abs(0.5 * (a + b), DIFFERENCE_WIDTH_K), opposed)


def unstable_share(lower: ArrayLike, upper: ArrayLike) -> FloatArray:
    """How far the air in a level gap is driven to rolls by both of its faces.

    ``4 x y / (x + y)^2``, x the lower face's excess over the air around and y what the upper one
    lies below it: one where the air is as warm as their mean, none where it is warmer than both or
    colder, and so lies in layers. The form is ours, the simplest without a step between the two.

    Parameters
    ----------
    lower, upper : array_like
        Lower and upper face minus the air around [K].

    Returns
    -------
    ndarray
        Share between 0 and 1 [-], broadcast shape.
    """
    x, y = np.asarray(lower, dtype=np.float64), -np.asarray(upper, dtype=np.float64)
    size_x, size_y = soft_abs(x, SIGN_WIDTH_K), soft_abs(y, SIGN_WIDTH_K)
    both = size_x + size_y
    return np.asarray((x + size_x) * (y + size_y) / (both * both))


def enclosed_rolls(
    rayleigh: ArrayLike, width: ArrayLike, length: ArrayLike, level: ArrayLike
) -> FloatArray:
    """Share of a level gap heated from below whose rolls, if any, do not reach its open edges.

    ``(1 - d/(2 L))^2 ((1 - 1708/R)+)^2``, ``R = Ra cos t``, falling in a straight line from 60
    degrees to none upright: rolls are about as wide as the gap is high, so that those within one
    width of an open edge exchange air with what is outside and those further in carry heat across
    only. The second square leaves no corner where rolls set in.

    Parameters
    ----------
    rayleigh : array_like
        Rayleigh number with the width of the gap and the difference of its faces [-].
    width, length : array_like
        Width of the gap, and its length along the flow as a level one has it, half its mean
        extent [m].
    level : array_like
        Cosine of the tilt: 1 level, 0 upright [-].

    Returns
    -------
    ndarray
        Share between 0 and 1 [-], broadcast shape.

    References
    ----------
    Onset at 1708 and rolls of half the critical wavelength, 1.008 widths: A. Pellew, R. V.
    Southwell, "On maintained convective motion in a fluid heated from below", Proc. Royal Society A
    176, 1940, 312-343 (from memory). That the row at the edge is open and the others are not is
    ours.
    """
    c = np.clip(np.asarray(level, dtype=np.float64), 0.0, 1.0)
    ra = np.maximum(np.asarray(rayleigh, dtype=np.float64) * c, 1e-9)
    inner = np.maximum(1.0 - 0.5 * np.asarray(width) / np.asarray(length), 0.0)
    rolls = np.maximum(1.0 - 1708.0 / ra, 0.0)
    flat = np.clip((90.0 - np.degrees(np.arccos(c))) / 30.0, 0.0, 1.0)
    return np.asarray(inner * inner * (rolls * rolls) * flat)


class GapExchange(NamedTuple):
    """What two faces of a gap exchange; both fields have the broadcast shape of the inputs."""

    share: FloatArray
    """Share of its free film that either face keeps to the air outside [-]."""
    straight: FloatArray
    """What goes straight across per area and difference of the faces [W/(m2 K)]."""


def gap_exchange(
    film_a: FloatArray,
    film_b: FloatArray,
    difference_a: FloatArray,
    difference_b: FloatArray,
    film_temperature: FloatArray,
    pressure: ArrayLike,
    width: ArrayLike,
    length: ArrayLike,
    gravity: ArrayLike,
    up_cosine: ArrayLike,
    closed: ArrayLike,
) -> GapExchange:
    """Exchange of two facing faces with each other and with the air outside their gap.

    Either face gives ``p h (T - T_air)`` to the air, p by `channel_share` (none with closed edges).
    Straight across goes ``(1 - X) G_a G_b / (G_a + G_b)``, with
    ``G = (1 - p) 2 k Nu / d + p max(2 k / d, h)`` (rounded), Nu by `closed_cavity`, and
    ``X = p (h_a + h_b) / (G_a + G_b)`` what has gone to the air of it.

    Parameters
    ----------
    film_a, film_b : ndarray
        Free film coefficients of the faces [W/(m2 K)].
    difference_a, difference_b : ndarray
        Faces minus the air outside [K].
    film_temperature : ndarray
        Mean temperature of the faces [K].
    pressure : array_like
        Absolute pressure [Pa].
    width, length, gravity : array_like
        As `channel_share`.
    up_cosine : array_like
        Cosine between the normal of face a into the gap and up [-].
    closed : array_like
        1 with closed edges, 0 with open ones [-].

    Returns
    -------
    GapExchange
        Limiting cases: a narrow gap passes ``k / d`` straight and nothing to the air outside; a
        wide one leaves two free films.
    """
    properties = air(film_temperature, pressure)
    viscosity = properties.kinematic_viscosity
    per_volume = GRAVITY * properties.expansion * properties.prandtl / (viscosity * viscosity)
    drive = channel_drive(difference_a, difference_b)
    share = channel_share(drive, per_volume, width, length, gravity)
    across = difference_a - difference_b
    w = np.asarray(width, dtype=np.float64)
    rayleigh = per_volume * soft_abs(across, DIFFERENCE_WIDTH_K) * (w * w * w)
    below = np.asarray(up_cosine) * soft_sign(across, DIFFERENCE_WIDTH_K)
    up = np.asarray(up_cosine, dtype=np.float64)
    unstable = unstable_share(
        np.where(up > 0.0, difference_a, difference_b),
        np.where(up > 0.0, difference_b, difference_a),
    )
    share = share * (1.0 - unstable * enclosed_rolls(rayleigh, w, length, np.abs(up)))
    share = share * (1.0 - np.asarray(closed, dtype=np.float64))
    nusselt = closed_cavity(rayleigh, np.asarray(length, dtype=np.float64) / w, below)
    half = 2.0 * properties.conductivity / w
    enclosed = (1.0 - share) * half * nusselt
    one, other = (enclosed + share * _larger(half, film) for film in (film_a, film_b))
    passed = 1.0 - share * (film_a + film_b) / (one + other)
    return GapExchange(share, np.asarray(passed * one * other / (one + other)))


def _larger(half: FloatArray, film: FloatArray) -> FloatArray:
    """Rounded larger of conduction across half a gap and a film."""
    largest = np.maximum(half, film)
    ratio = np.minimum(half, film) / largest
    return np.asarray(largest * (1.0 + ratio**GAP_EXPONENT) ** (1.0 / GAP_EXPONENT))


def stream_retention(
    wall: ArrayLike, air_next: ArrayLike, step: ArrayLike, decay: ArrayLike
) -> FloatArray:
    """Share of a stream's heat that it still carries into the next layer of the air.

    ``d / (d + s)``, d the stream's mixed excess over that layer and s the warming of the air into
    it. The enthalpy a stream carries over the air around it obeys ``dE/dz = q' - M cp dT/dz`` with
    ``E = 0.39 M cp (T_wall - T)``, so ``dE/dz = q' - E T' / (0.39 (T_wall - T))``; this is its
    backward step. A stream passes no layer warmer than its wall.

    Parameters
    ----------
    wall : array_like
        Temperature of the stream's wall [K].
    air_next : array_like
        Air of the next layer [K].
    step : array_like
        Air of the next layer minus that of this one [K].
    decay : array_like
        Share of the excess that is left at that height above the wall's edge, see `plume_decay`.

    Returns
    -------
    ndarray
        Share between 0 and 1 [-], broadcast shape.
    """
    excess = np.asarray(wall) - air_next
    excess = 0.5 * (excess + soft_abs(excess, DIFFERENCE_WIDTH_K))
    d = MIXED_EXCESS * excess * np.asarray(decay, dtype=np.float64) + DIFFERENCE_WIDTH_K
    s = np.asarray(step, dtype=np.float64)
    s = 0.5 * (s + soft_abs(s, STEP_WIDTH_K))
    return np.asarray(d / (d + s))


def plume_decay(above: ArrayLike, length: ArrayLike, width: ArrayLike) -> FloatArray:
    """Share of its excess that a stream keeps at a height above the edge it left.

    ``(L/(L+y))^(3/5) (w/(w+y))^(2/5)``: a plane plume near a wide edge, a round one far above.

    Parameters
    ----------
    above : array_like
        Height above the edge [m]; below it the share is one.
    length, width : array_like
        Length of the face along the stream, and its width [m].

    Returns
    -------
    ndarray
        Share [-], broadcast shape.

    References
    ----------
    Exponents of laminar plumes: B. Gebhart et al., Buoyancy-Induced Flows and Transport, 1988 (from
    memory). Their joining is ours; no case tests it.
    """
    y = np.maximum(np.asarray(above, dtype=np.float64), 0.0)
    long, wide = np.asarray(length, dtype=np.float64), np.asarray(width, dtype=np.float64)
    return np.asarray((long / (long + y)) ** PLANE_DECAY * (wide / (wide + y)) ** ROUND_DECAY)
