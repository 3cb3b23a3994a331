"""The registry of laws: where each comes from, where it holds and how well.

The functions live with their subject; the range audit and the contract tests read this table.
"""

from __future__ import annotations

import math
from collections.abc import Callable

import numpy as np
import numpy.typing as npt
from numpy.typing import ArrayLike

from enclosure_check.physics import bodies, plates
from enclosure_check.physics.data_sheet import EXPERIMENT, MEMORY, SCATTER, Correlation
from enclosure_check.physics.opening_laws import OPENING_LAWS

FloatArray = npt.NDArray[np.float64]
Law = Callable[[ArrayLike, ArrayLike], FloatArray]

_CHURCHILL_CHU_PLATE = (
    "S. W. Churchill, H. H. S. Chu, 1975, Correlating equations for laminar and turbulent free "
    "convection from a vertical plate, International Journal of Heat and Mass Transfer 18, "
    "1323-1329"
)
_MCADAMS = "W. H. McAdams, 1954, Heat Transmission, 3rd ed., McGraw-Hill"

_SEALED_BOXES = f"{EXPERIMENT}: totals of sealed boxes 8 %, shares of their walls 0.09"

_ROWS = (
    Correlation(
        key="churchill_chu_1975_vertical",
        name="Churchill & Chu, vertical plate",
        equation="Nu = 0.68 + 0.670 Ra^(1/4) / (1 + (0.492/Pr)^(9/16))^(4/9) to Ra = 1e9; "
        "Nu = (0.825 + 0.387 Ra^(1/6) / (1 + (0.492/Pr)^(9/16))^(8/27))^2 from Ra = 1e10; "
        "blended in between",
        characteristic_length="length along gravity",
        variable="rayleigh",
        valid_from=0.0,
        valid_to=1e12,
        prandtl_from=0.0,
        prandtl_to=math.inf,
        accuracy_pct=10.0,
        accuracy_basis=f"{MEMORY}; near transition less, which is a cause of its own: the authors' "
        "full law lies 17 % above their laminar law at Ra = 1e8 and 33 % above it at 1e9",
        reference=_CHURCHILL_CHU_PLATE,
    ),
    Correlation(
        key="lloyd_moran_hot_up",
        name="Lloyd & Moran, horizontal plate, warm face up or cold face down",
        equation="Nu = max(((2/pi)^4 + 0.54^4 Ra)^(1/4), 0.15 Ra^(1/3))",
        characteristic_length="area / perimeter",
        variable="rayleigh",
        valid_from=1e4,
        valid_to=1e11,
        prandtl_from=0.5,
        prandtl_to=math.inf,
        accuracy_pct=15.0,
        accuracy_basis=MEMORY,
        reference="J. R. Lloyd, W. R. Moran, 1974, Natural convection adjacent to horizontal "
        f"surface of various planforms, Journal of Heat Transfer 96, 443-447; {_MCADAMS}",
    ),
    Correlation(
        key="raithby_hollands_hot_down",
        name="Raithby & Hollands, horizontal plate, warm face down or cold face up",
        equation="Nu = ((2/pi)^5 + 0.52^5 Ra)^(1/5)",
        characteristic_length="area / perimeter",
        variable="rayleigh",
        valid_from=1e4,
        valid_to=1e9,
        prandtl_from=0.7,
        prandtl_to=math.inf,
        accuracy_pct=20.0,
        accuracy_basis=MEMORY,
        reference="G. D. Raithby, K. G. T. Hollands, 1998, Natural convection, in Handbook of Heat "
        "Transfer, 3rd ed., McGraw-Hill",
    ),
    Correlation(
        key="mcadams_hot_down",
        name="McAdams, horizontal plate, warm face down or cold face up",
        equation="Nu = 0.27 Ra^(1/4)",
        characteristic_length="area / perimeter",
        variable="rayleigh",
        valid_from=1e5,
        valid_to=1e10,
        prandtl_from=0.7,
        prandtl_to=math.inf,
        accuracy_pct=20.0,
        accuracy_basis=MEMORY,
        reference=_MCADAMS,
    ),
    Correlation(
        key="yovanovich_cuboid",
        name="Yovanovich, cuboid with air all round",
        equation="Nu = 3.388 + F(Pr) G Ra^(1/4), F = 0.670 / (1 + (0.5/Pr)^(9/16))^(4/9), "
        "G = 2^(1/8) ((0.625 L^(4/3) W + H (L + W)^(4/3)) / (H W + H L + L W)^(7/6))^(3/4)",
        characteristic_length="square root of the whole area",
        variable="rayleigh",
        valid_from=0.0,
        valid_to=5e8,
        prandtl_from=0.0,
        prandtl_to=math.inf,
        accuracy_pct=10.0,
        accuracy_basis=f"{EXPERIMENT} (-5 to +10 %); the author's own range ends at 1e8 ({MEMORY})",
        reference="M. M. Yovanovich, 1987, On the effect of shape, aspect ratio and orientation "
        "upon natural convection from isothermal bodies of complex shape, ASME HTD-82, 121-129",
    ),
    Correlation(
        key="box_shelter",
        name="shelter of the faces of a box by each other",
        equation="h = scale^w shelter h_plate; shelter: vertical 0.90, stable horizontal 0.95, "
        "unstable horizontal 0.68 - 0.35 r; scale = cuboid law / sum of sheltered plate laws",
        characteristic_length="square root of the whole area",
        variable="rayleigh",
        valid_from=8e7,
        valid_to=5e8,
        prandtl_from=0.7,
        prandtl_to=0.72,
        accuracy_pct=10.0,
        accuracy_basis=f"{EXPERIMENT}: total; one face alone more, see accuracies of our own forms",
        reference="form and constants made for this project from its numerical experiments",
    ),
    Correlation(
        key="flat_plate_in_wind",
        name="Pohlhausen, plate in wind along it, turbulent from Re = 5e5 on",
        equation="Nu = 0.664 Re^(1/2) Pr^(1/3) to Re = 5e5; Nu = (0.037 Re^(4/5) - 871) Pr^(1/3) "
        "from Re = 6e5; blended in between",
        characteristic_length="length along the wind",
        variable="reynolds",
        valid_from=1e3,
        valid_to=1e8,
        prandtl_from=0.6,
        prandtl_to=60.0,
        accuracy_pct=30.0,
        accuracy_basis=f"{MEMORY}: on a box, as the mean over square cylinders across the wind, "
        "0.158 Re^0.66 for Re 5e3 to 6e4 (28 % low to 8 % high); a thin plate itself about 5",
        reference="E. Pohlhausen, 1921, Der Wärmeaustausch zwischen festen Körpern und "
        "Flüssigkeiten mit kleiner Reibung und kleiner Wärmeleitung, Zeitschrift für angewandte "
        "Mathematik und Mechanik 1, 115-121; turbulent part F. P. Incropera, D. P. DeWitt, "
        f"Fundamentals of Heat and Mass Transfer ({MEMORY})",
    ),
    Correlation(
        key="churchill_chu_1975_cylinder",
        name="Churchill & Chu, horizontal cylinder",
        equation="Nu = (0.60 + 0.387 Ra^(1/6) / (1 + (0.559/Pr)^(9/16))^(8/27))^2",
        characteristic_length="diameter",
        variable="rayleigh",
        valid_from=1e-5,
        valid_to=1e12,
        prandtl_from=0.0,
        prandtl_to=math.inf,
        accuracy_pct=20.0,
        accuracy_basis=f"{SCATTER}: Morgan 1975, Ra 1e2 to 1e9 (18 % low at 1e2)",
        reference="S. W. Churchill, H. H. S. Chu, 1975, Correlating equations for laminar and "
        "turbulent free convection from a horizontal cylinder, International Journal of Heat and "
        "Mass Transfer 18, 1049-1053",
    ),
    Correlation(
        key="chen_eichhorn_stratified",
        name="Chen & Eichhorn, upright plate in air that warms upwards",
        equation="h / h_even = (1 + S)^0.38, S = rise of the air over the height of the plate / "
        "mean difference between plate and air; S taken as 4 at most",
        characteristic_length="length along gravity",
        variable="stratification",
        valid_from=0.0,
        valid_to=2.0,
        prandtl_from=0.7,
        prandtl_to=6.0,
        accuracy_pct=2.0,
        accuracy_basis="scatter against an integral solution of the laminar film, Pr 0.71, S 0.25 "
        "to 1.9; form, constants and range from memory",
        reference="C. C. Chen, R. Eichhorn, 1976, Natural convection from a vertical surface to a "
        "thermally stratified fluid, Journal of Heat Transfer 98, 446-451 (from memory)",
    ),
    Correlation(
        key="elsherbiny_vertical_gap",
        name="ElSherbiny, Raithby & Hollands, upright gap",
        equation="Nu = max(0.0605 Ra^(1/3), (1 + (0.104 Ra^0.293 / (1 + (6310/Ra)^1.36))^3)^(1/3), "
        "0.242 (Ra/A)^0.272), A = height / width",
        characteristic_length="width of the gap",
        variable="rayleigh",
        valid_from=1e2,
        valid_to=2e7,
        prandtl_from=0.7,
        prandtl_to=0.72,
        accuracy_pct=10.0,
        accuracy_basis=f"{EXPERIMENT}: Ra 1.8e3 to 1.1e5, A 4 to 15 (up to 7 % low); the authors' "
        f"aspect 5 to 110 ({MEMORY})",
        reference="S. M. ElSherbiny, G. D. Raithby, K. G. T. Hollands, 1982, Heat transfer by "
        "natural convection across vertical and inclined air layers, Journal of Heat Transfer 104, "
        "96-102",
    ),
    Correlation(
        key="hollands_heated_below",
        name="Hollands, gap heated from below, to 60 degrees from level",
        equation="Nu = 1 + 1.44 (1 - 1708/R)+ (1 - 1708 sin(1.8 t)^1.6 / R)+ + "
        "((R/5830)^(1/3) - 1)+, R = Ra cos t",
        characteristic_length="width of the gap",
        variable="rayleigh",
        valid_from=0.0,
        valid_to=1e7,
        prandtl_from=0.7,
        prandtl_to=0.72,
        accuracy_pct=10.0,
        accuracy_basis=f"{MEMORY}; two-dimensional numerical experiments made for this project lie "
        "10 % above it at Ra 1.4e4 and 22 % at 1.1e5, where real air moves in three dimensions",
        reference="K. G. T. Hollands, T. E. Unny, G. D. Raithby, L. Konicek, 1976, Free convective "
        "heat transfer across inclined air layers, Journal of Heat Transfer 98, 189-193",
    ),
    Correlation(
        key="bar_cohen_rohsenow_channel",
        name="Bar-Cohen & Rohsenow, gap with open edges: share of the free film that goes out",
        equation="p = (1 + (576/2.873) El^(-3/2))^(-1/2), which is "
        "Nu = (576/El^2 + 2.873/El^(1/2))^(-1/2) over Nu far apart; El = Ra_width width / length",
        characteristic_length="width of the gap",
        variable="elenbaas",
        valid_from=0.1,
        valid_to=1e5,
        prandtl_from=0.7,
        prandtl_to=0.72,
        accuracy_pct=5.0,
        accuracy_basis=f"{SCATTER}: Elenbaas 1942, El 1 to 1e4 (5 % low at 10); of two like plates",
        reference="A. Bar-Cohen, W. M. Rohsenow, 1984, Thermally optimum spacing of vertical, "
        "natural convection cooled, parallel plates, Journal of Heat Transfer 106, 116-123",
    ),
    Correlation(
        key="streams_in_layers",
        name="streams along surfaces through layers of air",
        equation="E_next = (E + q) d / (d + s), d = 0.39 (T_wall - T_next) times the decay above "
        "the surface, s = T_next - T",
        characteristic_length="none",
        variable="none",
        valid_from=0.0,
        valid_to=math.inf,
        prandtl_from=0.7,
        prandtl_to=0.72,
        accuracy_pct=8.0,
        accuracy_basis=_SEALED_BOXES,
        reference="S. Ostrach, 1953, An analysis of laminar free-convection flow and heat transfer "
        "about a flat plate parallel to the direction of the generating body force, NACA Report "
        "1111, for the 0.39; form made for this project",
    ),
    Correlation(
        key="films_in_corners",
        name="films of two walls in their corner",
        equation="h / h_plate = 1 / ((1 + 1.46 k/(h a)) (1 + 1.46 k/(h b))), a and b the edges",
        characteristic_length="edges of the wall",
        variable="none",
        valid_from=0.0,
        valid_to=math.inf,
        prandtl_from=0.0,
        prandtl_to=math.inf,
        accuracy_pct=8.0,
        accuracy_basis=_SEALED_BOXES,
        reference="I. Langmuir, E. Q. Adams, G. S. Meikle, 1913, Flow of heat through furnace "
        "walls: the shape factor, Trans. American Electrochemical Society 24 (from memory), for "
        "the edge of a layer; form made for this project",
    ),
    Correlation(
        key="view_factors",
        name="view factors between rectangles parallel to the planes of one frame",
        equation="A F = sum of 16 corner terms of the closed form; past obstacles times the share "
        "of rays that pass, weighted by cos cos / (pi r^2); closed by least squares",
        characteristic_length="none",
        variable="none",
        valid_from=0.0,
        valid_to=math.inf,
        prandtl_from=0.0,
        prandtl_to=math.inf,
        accuracy_pct=0.7,
        accuracy_basis="scatter against 16384 rays of other points: largest error of a pair past "
        "obstacles, of the smaller area; exact without obstacles",
        reference="J. R. Ehlert, T. F. Smith, 1993, View factors for perpendicular and parallel "
        "rectangular plates, Journal of Thermophysics and Heat Transfer 7, 173-175 (from memory)",
    ),
    Correlation(
        key="swinbank_sky",
        name="Swinbank, clear sky",
        equation="T_sky = 0.0552 T_air^1.5",
        characteristic_length="none",
        variable="temperature",
        valid_from=275.0,
        valid_to=303.0,
        prandtl_from=0.0,
        prandtl_to=math.inf,
        accuracy_pct=2.0,
        accuracy_basis=f"{MEMORY} (about 5 K)",
        reference="W. C. Swinbank, 1963, Long-wave radiation from clear skies, Quarterly Journal "
        "of the Royal Meteorological Society 89, 339-348 (from memory)",
    ),
    Correlation(
        key="air_properties",
        name="dry air as an ideal gas, Lemmon & Jacobsen transport properties",
        equation="rho = p / (R T), beta = 1 / T; viscosity and conductivity by cubics in T",
        characteristic_length="none",
        variable="temperature",
        valid_from=193.15,
        valid_to=523.15,
        prandtl_from=0.0,
        prandtl_to=math.inf,
        accuracy_pct=0.35,
        accuracy_basis=f"{SCATTER}: CoolProp",
        reference="E. W. Lemmon, R. T. Jacobsen, 2004, Viscosity and thermal conductivity "
        "equations for nitrogen, oxygen, argon, and air, International Journal of Thermophysics "
        "25, 21-69",
    ),
    *OPENING_LAWS,
)

#: Every law used, by key.
CORRELATIONS: dict[str, Correlation] = {row.key: row for row in _ROWS}

#: Keys for the law codes of `PlateFilm`: vertical, hot side up, hot side down.
PLATE_LAWS: tuple[str, str, str] = (
    "churchill_chu_1975_vertical",
    "lloyd_moran_hot_up",
    "raithby_hollands_hot_down",
)


def _cube(ra: ArrayLike, pr: ArrayLike) -> FloatArray:
    return bodies.cuboid_nusselt(ra, pr, bodies.cuboid_gravity_function(1.0, 1.0, 1.0))


def _of_rayleigh(law: Callable[[ArrayLike], FloatArray]) -> Law:
    def with_prandtl(ra: ArrayLike, pr: ArrayLike) -> FloatArray:
        return np.broadcast_to(law(ra), np.broadcast_shapes(np.shape(ra), np.shape(pr)))

    return with_prandtl


#: The laws of the form Nu(Ra, Pr); the cuboid's is shown for a cube.
LAWS: dict[str, Law] = {
    "churchill_chu_1975_vertical": plates.vertical_plate,
    "lloyd_moran_hot_up": _of_rayleigh(plates.hot_side_up),
    "raithby_hollands_hot_down": _of_rayleigh(plates.hot_side_down),
    "mcadams_hot_down": _of_rayleigh(plates.mcadams_down),
    "yovanovich_cuboid": _cube,
    "churchill_chu_1975_cylinder": bodies.horizontal_cylinder,
}
