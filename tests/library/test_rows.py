"""Every shipped row is complete, physical and sourced, and loading cannot be spoilt by a caller."""

import re
from dataclasses import FrozenInstanceError, asdict, fields
from itertools import pairwise
from pathlib import Path

import pytest
import yaml

from enclosure_check.library import (
    BASES,
    TOUCH_CLASSES,
    Finish,
    Material,
    load_finishes,
    load_materials,
    rows,
)

FOLDER = Path(rows.__file__).parent
TABLES = ("materials.yaml", "finishes.yaml")
LOADERS = {"materials.yaml": load_materials, "finishes.yaml": load_finishes}

MATERIAL_NUMBERS = {
    "conductivity_w_per_mk",
    "conductivity_spread_pct",
    "density_kg_per_m3",
    "heat_capacity_j_per_kgk",
}
MATERIAL_TEXTS = {"touch_class", "basis", "source"}
MATERIAL_OPTIONAL = {"in_plane_conductivity_w_per_mk"}
FINISH_NUMBERS = {
    "emissivity",
    "emissivity_spread",
    "solar_absorptivity",
    "solar_absorptivity_spread",
}
FINISH_TEXTS = {"basis", "solar_basis", "source"}

WIDEST_CONDUCTIVITY_SPREAD_PCT = 40.0  # glass-filled polyamide, where the sources differ most
WIDEST_OPTICAL_SPREAD = 0.20  # a wider one would say nothing about the surface

MATERIALS = list(load_materials().values())
FINISHES = list(load_finishes().values())


def raw(file_name):
    """The table as the plain loader of PyYAML reads it."""
    return yaml.safe_load((FOLDER / file_name).read_text(encoding="utf-8"))


def named(row):
    return row.name


def is_number(value):
    return isinstance(value, int | float) and not isinstance(value, bool)


@pytest.mark.parametrize("file_name", TABLES)
def test_names_are_unique_snake_case_and_no_key_is_given_twice(file_name):
    table = yaml.compose((FOLDER / file_name).read_text(encoding="utf-8"))
    names = [key.value for key, _ in table.value]
    assert len(names) == len(set(names))
    for name in names:
        assert re.fullmatch(r"[a-z][a-z0-9]*(_[a-z0-9]+)*", name), name
    for name, row in table.value:
        keys = [key.value for key, _ in row.value]
        assert len(keys) == len(set(keys)), name.value


@pytest.mark.parametrize(
    ("file_name", "numbers", "texts", "optional"),
    [
        ("materials.yaml", MATERIAL_NUMBERS, MATERIAL_TEXTS, MATERIAL_OPTIONAL),
        ("finishes.yaml", FINISH_NUMBERS, FINISH_TEXTS, set()),
    ],
)
def test_rows_have_the_known_keys_and_types(file_name, numbers, texts, optional):
    for name, row in raw(file_name).items():
        assert set(row) - optional == numbers | texts, name
        for key in (numbers | optional) & set(row):
            assert is_number(row[key]), (name, key)
        for key in texts:
            assert isinstance(row[key], str), (name, key)


@pytest.mark.parametrize("file_name", TABLES)
def test_loading_keeps_every_value_and_the_order_of_the_file(file_name):
    loaded = LOADERS[file_name]()
    expected = raw(file_name)
    assert list(loaded) == list(expected)
    for name, row in expected.items():
        values = asdict(loaded[name])
        assert values["name"] == name
        assert {key: values[key] for key in row} == row


@pytest.mark.parametrize("row", [*MATERIALS, *FINISHES], ids=named)
def test_numbers_are_floats(row):
    for field in fields(row):
        if field.type is float:
            assert type(getattr(row, field.name)) is float, field.name


@pytest.mark.parametrize("material", MATERIALS, ids=named)
def test_a_material_is_physical(material):
    assert material.conductivity_w_per_mk > 0.0
    assert 0.0 <= material.conductivity_spread_pct <= WIDEST_CONDUCTIVITY_SPREAD_PCT
    # Fibres lie in the plane of a laminate, so that heat runs along it at least as easily.
    assert material.in_plane_conductivity_w_per_mk >= material.conductivity_w_per_mk
    # Solids at room temperature hold 1 to 4 MJ/(m³ K), from memory; a slip of a unit is far off.
    volumetric = material.density_kg_per_m3 * material.heat_capacity_j_per_kgk
    assert 0.9e6 <= volumetric <= 4.2e6


@pytest.mark.parametrize("material", MATERIALS, ids=named)
def test_a_touch_class_agrees_with_the_conductivity(material):
    # From memory: engineering metals conduct above 10 W/(m K), unfilled plastics and wood below 1.
    assert material.touch_class in TOUCH_CLASSES
    if material.touch_class == "metal":
        assert material.conductivity_w_per_mk > 10.0
    elif material.touch_class in ("plastic", "wood"):
        assert material.conductivity_w_per_mk < 1.0


@pytest.mark.parametrize("finish", FINISHES, ids=named)
def test_a_finish_is_physical_within_its_spread(finish):
    for value, spread in (
        (finish.emissivity, finish.emissivity_spread),
        (finish.solar_absorptivity, finish.solar_absorptivity_spread),
    ):
        assert 0.0 <= spread <= WIDEST_OPTICAL_SPREAD
        assert value - spread > 0.0
        assert value + spread <= 1.0


@pytest.mark.parametrize("row", [*MATERIALS, *FINISHES], ids=named)
def test_a_row_names_its_basis_and_its_source(row):
    assert row.basis in BASES
    assert row.source.strip() == row.source
    assert len(row.source) >= 10  # a word or two at the least, not a dash
    if isinstance(row, Finish):
        assert row.solar_basis in BASES


@pytest.mark.parametrize("row", [*MATERIALS, *FINISHES], ids=named)
def test_a_published_row_says_where(row):
    where = (
        "table",
        "Holman",
        "J. ",
        "Penney",
        "as white_plastic",
        "as white_paint",
        "as light_grey",
    )
    if row.basis == "published":
        assert any(word in row.source for word in where)


def test_rows_that_a_source_refers_to_exist():
    finishes = load_finishes()
    for finish in FINISHES:
        for name in re.findall(r"[a-z]+(?:_[a-z]+)+", finish.source):
            assert name in finishes, (finish.name, name)


def test_only_a_laminate_differs_by_direction():
    layered = {
        material.name
        for material in MATERIALS
        if material.in_plane_conductivity_w_per_mk != material.conductivity_w_per_mk
    }
    assert layered == {"fr4"}


def test_darker_colours_absorb_more_sun():
    finishes = load_finishes()
    for family in ("paint", "plastic"):
        colours = ("white", "light_grey", "grey", "dark_grey", "black")
        ladder = [finishes.get(f"{colour}_{family}") for colour in colours]
        absorbed = [finish.solar_absorptivity for finish in ladder if finish is not None]
        assert len(absorbed) >= 4
        assert all(pale < dark for pale, dark in pairwise(absorbed))


@pytest.mark.parametrize("load", [load_materials, load_finishes])
def test_the_mapping_is_read_only_and_shared(load):
    table = load()
    name = next(iter(table))
    with pytest.raises(TypeError, match="does not support item assignment"):
        table["mine"] = table[name]
    with pytest.raises(TypeError, match="does not support item deletion"):
        del table[name]
    assert load() is table


def test_rows_are_frozen():
    with pytest.raises(FrozenInstanceError, match="conductivity_w_per_mk"):
        load_materials()["copper"].conductivity_w_per_mk = 1.0
    with pytest.raises(FrozenInstanceError, match="emissivity"):
        load_finishes()["white_paint"].emissivity = 0.5


@pytest.mark.parametrize("load", [load_materials, load_finishes])
def test_the_loader_in_plain_python_reads_the_same(load, monkeypatch):
    monkeypatch.setattr(rows, "_LOADER", yaml.SafeLoader)
    assert load.__wrapped__() == load()


@pytest.mark.parametrize(
    ("load", "file_name", "first"),
    [(load_materials, "materials.yaml", "abs"), (load_finishes, "finishes.yaml", "white_paint")],
)
def test_an_unknown_or_missing_key_is_refused(load, file_name, first, tmp_path, monkeypatch):
    monkeypatch.setattr(rows, "_FOLDER", tmp_path)
    row = raw(file_name)[first]
    extra = {"mine": {**row, "colour": "red"}}
    (tmp_path / file_name).write_text(yaml.safe_dump(extra), encoding="utf-8")
    with pytest.raises(TypeError, match="unexpected keyword argument 'colour'"):
        load.__wrapped__()
    short = {"mine": {key: value for key, value in row.items() if key != "basis"}}
    (tmp_path / file_name).write_text(yaml.safe_dump(short), encoding="utf-8")
    with pytest.raises(TypeError, match="missing 1 required positional argument: 'basis'"):
        load.__wrapped__()


def test_expected_trade_names_are_shipped():
    assert {"abs", "polycarbonate", "aluminium_die_cast", "mild_steel", "fr4"} <= set(
        load_materials()
    )
    assert {"white_powder_coat", "black_anodised", "galvanised_new", "solder_mask"} <= set(
        load_finishes()
    )
    assert all(isinstance(material, Material) for material in MATERIALS)
