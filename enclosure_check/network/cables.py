"""Builds the cables: conductors through walls as fins on both sides, and what they lose."""

import math

import numpy as np
from numpy.typing import ArrayLike

from enclosure_check.description.case import CableCase, Case, WallCase
from enclosure_check.network.links import FloatArray, LinkLabel
from enclosure_check.network.site import Site
from enclosure_check.network.units import ZERO_CELSIUS_K, metres
from enclosure_check.physics.air import air, rayleigh_number
from enclosure_check.physics.bodies import horizontal_cylinder

# Copper of conductors. [W/(m K)] (textbook tables: 386 for pure copper)
CONDUCTOR_W_PER_MK = 386.0
# The same at 20 C [Ohm m], and the growth of it [1/K]. (textbook tables: annealed copper)
RESISTIVITY_OHM_M = 1.72e-8
RESISTIVITY_AT_K = ZERO_CELSIUS_K + 20.0
RESISTIVITY_SLOPE_PER_K = 0.00393
# Nominal difference between a cable and its air, for its film. [K] (common practice, no source)
CABLE_RISE_K = 10.0
# Coefficient of black radiation near room temperature, and the emissivity of insulation.
# (common practice, no source)
BLACK_RADIATION_W_PER_M2K = 6.0
CABLE_EMISSIVITY = 0.9


def build_cables(case: Case, site: Site) -> None:
    """Join the inside air to the outside through every wall's cables."""
    for wall in case.walls.values():
        for cable in wall.cables:
            _build_cable(wall, cable, site)


def _build_cable(wall: WallCase, cable: CableCase, site: Site) -> None:
    """Join inside and outside air by a cable, and put its loss inside into the inside air."""
    builder = site.builder
    section, inside = cable.conductor_mm2 * 1e-6, metres(cable.inside_mm)
    film = cable_film(metres(cable.outer_mm), builder.reference_k, builder.pressure_pa)
    each = float(cable_conductance(section, metres(cable.outer_mm), inside, film))
    label = LinkLabel(f"wall:{wall.name}", "cable")
    site.conduct_from_air(site.ambient, cable.count * each, label)
    site.warm_air(
        cable.count * cable.current_a**2 * RESISTIVITY_OHM_M * inside / section,
        LinkLabel(f"cable:{wall.name}/{cable.name}", "power"),
        stated_at_k=RESISTIVITY_AT_K,
        slope=RESISTIVITY_SLOPE_PER_K,
    )


def cable_film(outer: ArrayLike, air_k: ArrayLike, pressure_pa: ArrayLike) -> FloatArray:
    """Coefficient of a cable's surface by free convection and radiation, at a nominal difference.

    The horizontal cylinder of Churchill & Chu at 10 K over the air, and ``6 W/(m2 K)`` times an
    emissivity of 0.9.

    Parameters
    ----------
    outer : array_like
        Diameter over the insulation [m].
    air_k : array_like
        Temperature of the surrounding air [K].
    pressure_pa : array_like
        Its pressure [Pa].

    Returns
    -------
    ndarray
        Coefficient [W/(m2 K)], broadcast shape.

    References
    ----------
    Film as `horizontal_cylinder`, 20 %; the nominal difference and the radiation are common
    practice without a source.
    """
    properties = air(np.asarray(air_k) + CABLE_RISE_K / 2, pressure_pa)
    rayleigh = rayleigh_number(CABLE_RISE_K, outer, properties)
    nusselt = horizontal_cylinder(rayleigh, properties.prandtl)
    film = nusselt * properties.conductivity / np.asarray(outer)
    return np.asarray(film + BLACK_RADIATION_W_PER_M2K * CABLE_EMISSIVITY)


def cable_conductance(
    section: ArrayLike, outer: ArrayLike, inside: ArrayLike, film: ArrayLike
) -> FloatArray:
    """Conductance from inside to outside air by one conductor, a fin on both sides of a wall.

    ``1 / (1/(g tanh(m L)) + 1/g)`` with ``g = sqrt(h P k A)``, ``m = sqrt(h P / (k A))``,
    ``P = pi D``: of the length L inside, the free end adiabatic, and without end outside.

    Parameters
    ----------
    section : array_like
        Section A of the copper [m2].
    outer : array_like
        Diameter D over the insulation [m].
    inside : array_like
        Length L inside the box [m].
    film : array_like
        Coefficient h of the surface, the same on both sides [W/(m2 K)].

    Returns
    -------
    ndarray
        Conductance [W/K], broadcast shape.

    Notes
    -----
    Exact for a fin of even section. The insulation conducts nothing along and resists nothing
    across; the wall itself takes none of the heat.
    """
    core = CONDUCTOR_W_PER_MK * np.asarray(section, dtype=np.float64)
    surface = np.asarray(film) * math.pi * np.asarray(outer)
    endless = np.sqrt(surface * core)
    ended = np.tanh(np.sqrt(surface / core) * np.asarray(inside))
    return np.asarray(endless * ended / (1.0 + ended))
