"""What the model's own forms of films and air turn: inside a box, and in transition outside."""

import numpy as np

from enclosure_check.findings.turning import Turns
from enclosure_check.network.films import BoxFilm, FilmAudit
from enclosure_check.network.inside_air import InsideAir
from enclosure_check.network.links import FloatArray
from enclosure_check.network.wind import BoxFilmInWind
from enclosure_check.physics.air import air, rayleigh_number
from enclosure_check.physics.plates import VERTICAL
from enclosure_check.physics.transition import DOUBTED_FROM, transition_distance

# Faces steeper than this have the film of an upright plate, flatter ones that of a level one. [-]
_LEVEL_COSINE = 0.5


def turn_inside_air(turns: Turns, kind: InsideAir, heat: FloatArray, straight: int) -> None:
    """Let laws of films, and what is ours about films and air inside, turn film knobs.

    Parameters
    ----------
    turns
        Collects what turns what.
    kind
        All convection inside.
    heat
        Through its links [W], shape (m,).
    straight
        Knob on what goes straight across gaps.
    """
    rise, reference = turns.solved.solution.rise, turns.network.reference_k
    audit = kind.audit(rise, reference)
    for code in range(4):
        of_law = audit.law[:, 0] == code
        if of_law.any():
            own = of_law.astype(np.float64)
            turns.turn_film((f"film_{code}",), f"film_{code}", kind, films=own)
    doubt = _doubt(audit, kind.pressure_pa)
    if doubt.any():
        turns.turn_film(("transition",), "transition", kind, films=doubt)
    films = len(kind.cell)
    entering = heat[:films] + heat[films : 2 * films]
    if len(kind.pairs.first):
        filled = _filled(kind, audit, entering, turns.air_conductivity)
        turns.turn_film(("gap_films",), "gap_films", kind, films=filled)
        turns.turn(("gap_films",), "gap_films", "link", straight)
    _turn_faces(turns, kind, entering)
    if kind.stirring == 0.0:
        _turn_air(turns, kind, entering)


def _doubt(audit: FilmAudit, pressure_pa: float) -> FloatArray:
    """Distance of the two laws of upright films, as a share of ours, shape (s,)."""
    doubted = (audit.law == VERTICAL) & (audit.rayleigh > DOUBTED_FROM)
    if not doubted.any():
        return np.zeros(len(audit.law))
    prandtl = air(audit.film_temperature, pressure_pa).prandtl
    return np.asarray(np.where(doubted, transition_distance(audit.rayleigh, prandtl), 0.0)[:, 0])


def _filled(
    kind: InsideAir, audit: FilmAudit, entering: FloatArray, conductivity: float
) -> FloatArray:
    """How far films fill the gaps that a surface gives its heat in, shape (s,).

    Two films k/h thick, of the livelier face, over the width of the gap, one at most; zero outside
    any gap. The mean of a surface's sides, by their heat.
    """
    pairs, film, count = kind.pairs, audit.coefficient, len(audit.coefficient)
    larger = np.maximum(film[pairs.first], film[pairs.second])
    full = np.minimum(2.0 * conductivity / (larger * pairs.width), 1.0)[:, 0]
    of_side = np.where(kind.side_pair >= 0, full[kind.side_pair], 0.0)
    heat = np.bincount(kind.side, np.abs(entering), len(of_side))
    whole = np.bincount(kind.side_surface, heat, count)
    filled = np.bincount(kind.side_surface, heat * of_side, count)
    return np.asarray(filled / np.maximum(whole, 1e-30))


def _turn_faces(turns: Turns, kind: InsideAir, entering: FloatArray) -> None:
    """Let heat go from one face of a board to the others: to its rim, to its unstable side."""
    names = kind.surfaces.names
    by_face = np.bincount(kind.side_surface[kind.side], entering, len(names)).astype(np.float64)
    up = kind.surfaces.up_cosine[:, 0]
    unstable = by_face * up > _LEVEL_COSINE * np.abs(by_face)
    of_board: dict[str, list[int]] = {}
    for index, name in enumerate(names):
        what, _, face = name.partition(" ")
        if what == "board":
            of_board.setdefault(face.rpartition(", ")[0], []).append(index)
    rims, tops = np.zeros(len(names)), np.zeros(len(names))
    for faces in of_board.values():
        for index in faces:
            rim = names[index].endswith(", rim")
            if not rim and not unstable[index]:
                continue
            others = [each for each in faces if each != index]
            given_up = _given_up(by_face[index], by_face[others])
            (rims if rim else tops)[[index, *others]] = 1.0, *([-given_up] * len(others))
    for family, shares in (("board_rim", rims), ("board_top", tops)):
        if shares.any():
            turns.turn_film((family,), family, kind, films=shares)


def _given_up(own: float, others: FloatArray) -> float:
    """Share of their heat that the other faces give up when one doubles its own, one at most."""
    return float(min(abs(own) / max(float(np.abs(others).sum()), 1e-30), 1.0))


def _turn_air(turns: Turns, kind: InsideAir, entering: FloatArray) -> None:
    """Let the air of the lower and of the upper half be warmer, apart from each other.

    By 100 %: as much as what warms the air is warmer than what cools it, both by their heat. What
    openings take leaves at the temperature that rises count from.
    """
    warming = float(np.maximum(entering, 0.0).sum())
    if warming == 0.0:
        return
    rise = turns.solved.solution.rise[kind.cell, 0]
    difference = float(entering @ rise) / warming
    upper = (np.arange(len(kind.air)) * 2 >= len(kind.air)).astype(np.float64)
    for key, half in (("air_below", 1.0 - upper), ("air_above", upper)):
        turns.turn_film((key,), key, kind, offsets=difference * half)


def outside_doubt(kind: BoxFilm, rise: FloatArray, reference_k: FloatArray) -> FloatArray:
    """Distance of the two laws on upright faces of the box outside, as a share of ours, (6,)."""
    shape = kind.geometry
    faces, around = rise[kind.nodes[:6]], rise[kind.nodes[6]]
    mean = float(reference_k[0] + 0.5 * (faces.mean() + around[0]))
    properties = air(mean, kind.pressure_pa)
    rayleigh = rayleigh_number(np.abs(faces - around)[:, 0], shape.fall_length, properties)
    upright = shape.open_faces & (np.abs(shape.up_cosine) < _LEVEL_COSINE)
    doubted = upright & (rayleigh > DOUBTED_FROM)
    if not doubted.any():
        return np.zeros(6)
    doubt = np.where(doubted, transition_distance(rayleigh, properties.prandtl), 0.0)
    if isinstance(kind, BoxFilmInWind):
        # Cubes of the films add: the free one counts by its share.
        own = np.concatenate((faces, around[None]))
        free, film = kind.audit(own, reference_k).coefficient, kind.films(own, reference_k)
        doubt = doubt * (free / np.maximum(film, 1e-30))[:, 0] ** 3
    return np.asarray(doubt)
