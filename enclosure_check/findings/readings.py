"""Readings from the bench beside the predictions, in or out of the band, and their bias."""

import math
from typing import Literal

from enclosure_check.description.case import ReadingCase
from enclosure_check.findings.certainty import ReadingBias, ReadingFinding
from enclosure_check.findings.confidence import Bands
from enclosure_check.findings.parts import point
from enclosure_check.findings.solved import Solved

_KINDS: tuple[Literal["part", "wall", "air"], ...] = ("part", "wall", "air")


def reading_findings(solved: Solved, bands: Bands | None) -> tuple[ReadingFinding, ...]:
    """Give the readings taken under this condition beside the predictions."""
    return tuple(_reading(solved, bands, reading) for reading in solved.case.readings)


def reading_node(solved: Solved, reading: ReadingCase) -> int:
    """Give the node whose temperature was measured."""
    places = solved.network.places
    if reading.kind == "part":
        return point(solved, reading.name, reading.point)
    if reading.kind == "wall":
        nodes = places.wall_outside if reading.point == "outside" else places.wall_inside
        return nodes[reading.name].mean
    return places.air


def _reading(solved: Solved, bands: Bands | None, reading: ReadingCase) -> ReadingFinding:
    node = reading_node(solved, reading)
    predicted = solved.at(node)
    difference = predicted - reading.measured_c
    band = None if bands is None else bands.band_k(node)
    return ReadingFinding(
        reading.run,
        next(kind for kind in _KINDS if kind == reading.kind),
        reading.name,
        reading.point,
        reading.measured_c,
        predicted,
        difference,
        band,
        None if band is None else abs(difference) <= band,
    )


def reading_bias(readings: tuple[ReadingFinding, ...]) -> tuple[ReadingBias, ...]:
    """Give the mean difference between prediction and reading by kind, over all runs."""
    rows = []
    for kind in _KINDS:
        own = [reading for reading in readings if reading.kind == kind]
        if own:
            differences = [reading.difference_k for reading in own]
            rows.append(
                ReadingBias(
                    kind,
                    len(own),
                    sum(bool(reading.inside_band) for reading in own),
                    sum(differences) / len(own),
                    math.sqrt(sum(each * each for each in differences) / len(own)),
                )
            )
    return tuple(rows)
