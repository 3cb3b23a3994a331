"""What makes a temperature uncertain, and by how much: every default in one table.

Half-widths at about 95 %. A document's ``tolerances`` go before those of inputs. Accuracies of
laws are those of their register (`physics.correlation`), read as half-widths at about 95 % of a
film or gap coefficient, whatever they rest on there.
"""

from typing import Literal

from enclosure_check.physics.correlation import CORRELATIONS
from enclosure_check.records import dataclass

Unit = Literal["%", "K", "-", "mm"]

PRACTICE = "common practice, no source"
JUDGEMENT = "judgement of this project"
OWN = (
    "twice the root mean square of {} deviations in numerical experiments made for this project: "
    "see accuracies of our own forms"
)


@dataclass(frozen=True)
class Row:
    """One family of causes."""

    words: str
    """What a reader calls it; ``{name}`` stands for whose it is."""
    half_width: float
    """At about 95 %, in ``unit``."""
    unit: Unit
    """Percent of the number, or its own unit."""
    basis: str
    shared: str
    """What of this family moves together; the rest is independent."""


def _law(key: str, words: str, shared: str = "one law, one cause") -> Row:
    law = CORRELATIONS[key]
    return Row(words, law.accuracy_pct, "%", f"register of laws: {law.name}", shared)


#: Every family of causes, by key.
CAUSES: dict[str, Row] = {
    # Laws ---------------------------------------------------------------------------------
    "outside_films": _law("box_shelter", "film law of the box outside"),
    "wind_films": _law("flat_plate_in_wind", "film law of the wind outside"),
    "top_share": Row(
        "share of the uppermost wall in the film outside",
        45.0,
        "%",
        OWN.format(5),
        "the other walls give up what it gains",
    ),
    "transition": Row(
        "laminar or turbulent flow along upright faces",
        115.0,
        "%",
        "of the distance between Churchill & Chu's two laws where the flow may be either: evenly "
        "likely within it (JCGM 100:2008, 4.3.7), 2/sqrt(3) of it",
        "all upright films of Ra 1e8 to 1e10, outside and inside",
    ),
    "outer_gap": _law("elsherbiny_vertical_gap", "law of the gap behind the {name} wall"),
    "film_0": _law("churchill_chu_1975_vertical", "film law of upright surfaces inside"),
    "film_1": _law("lloyd_moran_hot_up", "film law inside, warm face up"),
    "film_2": _law("raithby_hollands_hot_down", "film law inside, warm face down"),
    "film_3": _law("yovanovich_cuboid", "film law of bodies inside"),
    "board_films": Row(
        "films of boards that carry parts",
        20.0,
        "%",
        f"{JUDGEMENT}: components roughen the flow; the simplified law of boards with components, "
        "2.44 (dT/L)^(1/4), lies 70 % above that of a smooth plate",
        "all boards and the parts on them",
    ),
    "gaps_inside": _law("elsherbiny_vertical_gap", "laws of gaps inside"),
    "streams": Row(
        "what streams inside carry up",
        25.0,
        "%",
        "numerical experiments made for this project: excess of the air at mid height and at the "
        "top against ours",
        "one law, one cause",
    ),
    "gap_films": Row(
        "films and gaps together where faces lie close",
        18.0,
        "%",
        OWN.format(2),
        "all gaps, as far as two films fill them",
    ),
    "board_rim": Row(
        "share of their rim in the films of boards",
        35.0,
        "%",
        OWN.format(2),
        "all boards; its sides give up what a rim gains",
    ),
    "board_top": Row(
        "share of the unstable side in the films of flat boards",
        13.0,
        "%",
        OWN.format(2),
        "all flat boards; the other faces give up what it gains",
    ),
    "air_below": Row(
        "air in the lower half of the inside",
        9.0,
        "%",
        "of what warms the air over what cools it: " + OWN.format(15),
        "readings there, and the air that films there give heat to",
    ),
    "air_above": Row(
        "air in the upper half of the inside",
        14.0,
        "%",
        "of what warms the air over what cools it: " + OWN.format(15),
        "readings there, and the air that films there give heat to",
    ),
    "patches": Row("radiation inside by coarse patches", 3.0, "%", JUDGEMENT, "the whole inside"),
    "spreading": Row(
        "spreading that cells do not resolve",
        20.0,
        "%",
        f"{JUDGEMENT}: halving the cells moves no part by more than 3 % of its rise",
        "all parts",
    ),
    "cables": Row(
        "heat along cables",
        15.0,
        "%",
        "film of a cylinder 20 %, of which the square root counts; its nominal difference and "
        f"radiation: {JUDGEMENT}",
        "all cables",
    ),
    "openings": Row("loss of openings", 20.0, "%", PRACTICE, "all openings"),
    # Inputs -------------------------------------------------------------------------------
    "power_w": Row("power of {name}", 10.0, "%", PRACTICE, "none"),
    "other_power_w": Row("other power on board {name}", 20.0, "%", PRACTICE, "none"),
    "theta_jc_top_k_per_w": Row("theta_jc_top of {name}", 20.0, "%", PRACTICE, "none"),
    "theta_jb_k_per_w": Row("theta_jb of {name}", 20.0, "%", PRACTICE, "none"),
    "theta_jc_bottom_k_per_w": Row("theta_jc_bottom of {name}", 20.0, "%", PRACTICE, "none"),
    "bottom_contact_k_per_w": Row("joint under {name}", 30.0, "%", PRACTICE, "none"),
    "joint": Row("air under {name}, not stated", 50.0, "%", PRACTICE, "none"),
    "pad": Row(
        "conductivity of the pad of {name}", 20.0, "%", PRACTICE, "pads of one conductivity"
    ),
    "pad_contact": Row("contact faces of the pad of {name}", 30.0, "%", PRACTICE, "none"),
    "fillers": Row("fillers of board {name}", 20.0, "%", PRACTICE, "none"),
    "stand_offs": Row("stand-offs of board {name}", 30.0, "%", PRACTICE, "all of a board"),
    "edge_clamps": Row("edge clamps of board {name}", 30.0, "%", PRACTICE, "all of a board"),
    "can_frames": Row("frame of can {name}", 30.0, "%", PRACTICE, "none"),
    "still_air": Row(
        "still air under cans", 10.0, "%", f"{JUDGEMENT}: it may move a little", "all cans"
    ),
    "copper": Row(
        "copper of board {name}",
        10.0,
        "%",
        f"{PRACTICE}: coverage as drawn, and foil as etched",
        "all layers and zones of a board",
    ),
    "conductivity": Row("conductivity of {name}", 15.0, "%", PRACTICE, "walls of one material"),
    "emissivity": Row("emissivity of {name}", 0.05, "-", PRACTICE, "surfaces of one finish"),
    "solar_absorptivity": Row(
        "solar absorptivity of {name}", 0.05, "-", PRACTICE, "surfaces of one finish"
    ),
    "surface_emissivity": Row("emissivity behind the {name} wall", 0.05, "-", PRACTICE, "none"),
    "contact_w_per_m2k": Row("contact behind the {name} wall", 30.0, "%", PRACTICE, "none"),
    "gap_mm": Row("width of the gap behind the {name} wall", 0.2, "mm", PRACTICE, "none"),
    "surface_c": Row("surface behind the {name} wall", 2.0, "K", PRACTICE, "none"),
    "air_c": Row(
        "surrounding air",
        1.0,
        "K",
        PRACTICE,
        "all that is as warm as it: radiant surroundings, surfaces behind walls, the sky that "
        "follows it",
    ),
    "radiant_c": Row("radiant surroundings", 2.0, "K", PRACTICE, "none"),
    "sky_c": Row("sky", 5.0, "K", "register of laws: Swinbank, clear sky (about 5 K)", "none"),
    "wind_m_per_s": Row(
        "wind", 20.0, "%", f"{PRACTICE}; the film of the wind goes with its root", "all walls"
    ),
    "sun_w_per_m2": Row("sun", 10.0, "%", PRACTICE, "all walls"),
}

#: A share of a conductance that a stated half-width of a gap's width may come to at most. [-]
LARGEST_GAP_SHARE = 0.5
