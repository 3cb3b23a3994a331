"""What is kept from one network to the next serves only where nothing that matters changed."""

import functools
import sys
from collections.abc import Iterator
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from enclosure_check.description.case import Case
from enclosure_check.description.load import load_document
from enclosure_check.network.build import build_network
from enclosure_check.network.grid import shared_grid

SAMPLES = Path(__file__).parent.parent.parent / "sample_boards"
SHEET = np.full((2, 4, 6), 0.02)


def forget() -> None:
    """Clear all that the package keeps of earlier calls."""
    for name, module in list(sys.modules.items()):
        if name.startswith("enclosure_check"):
            for kept in vars(module).values():
                if isinstance(kept, functools._lru_cache_wrapper):
                    kept.cache_clear()


def leaves(thing: object, path: str = "") -> Iterator[tuple[str, object]]:
    """All values inside a network, arrays as shape and bytes, each with its path."""
    if isinstance(thing, np.ndarray):
        yield path, (thing.shape, thing.dtype, thing.tobytes())
    elif isinstance(thing, dict):
        for key, value in thing.items():
            yield from leaves(value, f"{path}[{key!r}]")
    elif isinstance(thing, (list, tuple)):
        for index, value in enumerate(thing):
            yield from leaves(value, f"{path}[{index}]")
    elif hasattr(thing, "__dict__"):
        for key, value in vars(thing).items():
            yield from leaves(value, f"{path}.{key}")
    else:
        yield path, thing


def nearly_alike(case: Case) -> Iterator[Case]:
    """Cases that differ from one in a single thing that decides the shape of a network."""
    yield case
    for name, part in case.parts.items():
        for changed in (
            replace(part, low_mm=tuple(0.4 + each for each in part.low_mm)),
            replace(part, size_mm=tuple(0.9 * each for each in part.size_mm)),
        ):
            yield replace(case, parts=case.parts | {name: changed})
    for name, board in case.boards.items():
        for changed in (
            replace(board, size_mm=tuple(1.01 * each for each in board.size_mm)),
            replace(board, low_mm=tuple(0.4 + each for each in board.low_mm)),
            replace(board, zones=()),
            replace(board, laminate=replace(board.laminate, in_plane_conductivity_w_per_mk=0.5)),
        ):
            yield replace(case, boards=case.boards | {name: changed})
    yield replace(case, inside_mm=tuple(1.1 * each for each in case.inside_mm))
    yield replace(case, up=(0.6, 0.0, 0.8))
    yield case


@pytest.mark.parametrize("name", ["wall_sensor_hub", "wayside_card_cage"])
def test_networks_are_those_built_afresh(name):
    forget()
    cases = load_document(str(SAMPLES / f"{name}.yaml")).cases()
    every = [*nearly_alike(cases[0]), *cases]
    after_others = [dict(leaves(build_network(case))) for case in every]
    for case, found in zip(every, after_others, strict=True):
        forget()
        fresh = dict(leaves(build_network(case)))
        assert found.keys() == fresh.keys()
        assert [path for path in fresh if found[path] != fresh[path]] == []


def test_alike_plates_are_one_and_others_are_not():
    axes, low, size, counts = (0, 1), (0.0, 0.0, 0.0), (0.1, 0.08, 0.0016), (4, 6)
    grid = shared_grid(axes, low, size, counts, SHEET)
    assert shared_grid(axes, low, size, counts, SHEET.copy()) is grid
    assert shared_grid(axes, low, size, counts, 1.01 * SHEET) is not grid
    assert shared_grid(axes, low, (0.1, 0.08, 0.002), counts, SHEET) is not grid


@pytest.mark.parametrize("ask", ["overlap", "taken"])
def test_what_is_kept_cannot_be_written_to(ask):
    grid = shared_grid((0, 1), (0.0, 0.0, 0.0), (0.1, 0.08, 0.0016), (4, 6), SHEET)
    found = getattr(grid, ask)((0.01, 0.01, 0.0), (0.03, 0.02, 0.0))
    with pytest.raises(ValueError, match="read-only"):
        found += 1.0
