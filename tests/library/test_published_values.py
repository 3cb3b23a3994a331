"""Shipped numbers against the published ones that they stand for.

A published range must lie within value and spread, with the value inside the range; a single
published number must lie within the spread of the value. Where a row is meant to *be* the
published number, equality is asked for. The spreads themselves are capped in `test_rows.py`.
"""

import pytest

from enclosure_check.library import load_finishes, load_materials

ROUNDING = 1e-9  # decimal fractions in binary: 0.21 against 0.175 times 1.2
WIDEST_BAND = 2.0  # a spread may be wider than the range it covers, but not twice as wide

TEXTBOOKS = "textbook and handbook tables, titles not recorded"
LAMINATE = "J. Electronic Materials 19 (1990) 1345"
OPTICAL = "published table of solar absorptance and emittance, title not recorded"
HOLMAN = "Holman, Heat Transfer, Table 8-4"
PENNEY = "Penney et al., mill-finish aluminium, measured"
MEMORY = "from memory"

CONDUCTIVITY_RANGES = [
    ("abs", 0.14, 0.21, TEXTBOOKS),
    ("polycarbonate", 0.19, 0.22, TEXTBOOKS),
    ("pa6", 0.24, 0.28, TEXTBOOKS),
    ("pa66_gf30", 0.23, 0.52, TEXTBOOKS),
    ("pmma", 0.17, 0.19, TEXTBOOKS),
    ("polypropylene", 0.10, 0.22, TEXTBOOKS),
    ("pvc", 0.12, 0.25, TEXTBOOKS),
    ("epoxy", 0.19, 0.23, TEXTBOOKS),
    ("aluminium_6063", 200.0, 218.0, MEMORY),
    ("mild_steel", 45.0, 60.0, MEMORY),
    ("galvanised_steel", 45.0, 60.0, MEMORY),
    ("stainless_316", 13.4, 16.3, MEMORY),
]

CONDUCTIVITIES = [
    ("polycarbonate_gf30", 0.26, TEXTBOOKS),
    ("pa66", 0.25, TEXTBOOKS),
    ("pbt", 0.21, TEXTBOOKS),
    ("polyester_smc", 0.2, TEXTBOOKS),
    ("phenolic_gf", 0.5, TEXTBOOKS),
    ("glass", 0.81, TEXTBOOKS),
    ("aluminium_pure", 237.0, TEXTBOOKS),
    ("copper", 386.0, TEXTBOOKS),
    ("stainless_304", 16.3, TEXTBOOKS),
    ("fr4", 0.343, LAMINATE),
    ("aluminium_6061", 167.0, MEMORY),
    ("aluminium_5052", 138.0, MEMORY),
    ("zinc_die_cast", 113.0, MEMORY),
]

EMISSIVITY_RANGES = [
    ("white_paint", 0.853, 0.97, f"0.89 to 0.97 {TEXTBOOKS}; white enamel 0.853 {OPTICAL}"),
    ("aged_white_paint", 0.89, 0.97, TEXTBOOKS),
    ("light_grey_paint", 0.80, 0.96, f"lacquer and oil paint, {TEXTBOOKS}"),
    ("grey_paint", 0.80, 0.96, f"lacquer and oil paint, {TEXTBOOKS}"),
    ("dark_grey_paint", 0.80, 0.96, f"lacquer and oil paint, {TEXTBOOKS}"),
    ("black_anodised", 0.85, 0.98, TEXTBOOKS),
    ("bare_aluminium_rolled", 0.04, 0.09, TEXTBOOKS),
    ("polished_aluminium", 0.04, 0.09, TEXTBOOKS),
    ("oxidised_aluminium", 0.2, 0.33, TEXTBOOKS),
    ("bare_steel", 0.66, 0.85, TEXTBOOKS),
    ("polished_steel", 0.07, 0.10, TEXTBOOKS),
    ("stainless_oxidised", 0.5, 0.7, TEXTBOOKS),
    ("copper_polished", 0.02, 0.05, TEXTBOOKS),
    ("copper_oxidised", 0.6, 0.8, TEXTBOOKS),
    ("clear_anodised", 0.76, 0.84, MEMORY),
    ("galvanised_new", 0.13, 0.28, MEMORY),
]

EMISSIVITIES = [
    ("white_paint", 0.94, f"titanium dioxide, {OPTICAL}"),
    ("white_paint", 0.924, f"epoxy, {OPTICAL}"),
    ("white_paint", 0.853, f"enamel, {OPTICAL}"),
    ("white_paint", 0.90, HOLMAN),
    ("black_paint", 0.874, OPTICAL),
    ("matt_black_paint", 0.97, TEXTBOOKS),
    ("matt_black_paint", 0.95, HOLMAN),
    ("silicone_aluminium_paint", 0.28, OPTICAL),
    ("aluminium_foil", 0.036, OPTICAL),
    ("bare_aluminium_rolled", 0.04, f"rolled, {TEXTBOOKS}"),
    ("bare_aluminium_rolled", 0.09, f"commercial sheet, {TEXTBOOKS}"),
    ("bare_steel", 0.66, f"rolled sheet, {TEXTBOOKS}"),
    ("white_plastic", 0.94, TEXTBOOKS),
    ("light_grey_plastic", 0.94, TEXTBOOKS),
    ("dark_grey_plastic", 0.94, TEXTBOOKS),
    ("black_plastic", 0.94, TEXTBOOKS),
    ("clear_glass", 0.94, TEXTBOOKS),
]

SOLAR_ABSORPTIVITIES = [
    ("white_paint", 0.19, f"titanium dioxide, {OPTICAL}"),
    ("white_paint", 0.248, f"epoxy, {OPTICAL}"),
    ("white_paint", 0.252, f"enamel, {OPTICAL}"),
    ("white_paint", 0.12, HOLMAN),
    ("black_paint", 0.975, OPTICAL),
    ("matt_black_paint", 0.96, HOLMAN),
    ("silicone_aluminium_paint", 0.25, OPTICAL),
    ("aluminium_foil", 0.192, OPTICAL),
    ("bare_aluminium_rolled", 0.13, PENNEY),
    ("aged_white_paint", 0.4, MEMORY),
    ("aged_white_paint", 0.5, MEMORY),
    ("grey_paint", 0.6, MEMORY),
    ("grey_paint", 0.75, MEMORY),
    ("clear_anodised", 0.14, MEMORY),
    ("clear_anodised", 0.35, MEMORY),
    ("galvanised_new", 0.65, MEMORY),
]


def assert_covers(value, half_width, low, high):
    """The value lies in the range, and the range in the band of the value, which is no wider than need be."""
    assert low <= value <= high
    assert value - half_width <= low + ROUNDING
    assert value + half_width >= high - ROUNDING
    assert half_width <= WIDEST_BAND * (high - low) / 2.0


@pytest.mark.parametrize(("name", "low", "high", "source"), CONDUCTIVITY_RANGES)
def test_conductivity_covers_the_published_range(name, low, high, source):
    row = load_materials()[name]
    value = row.conductivity_w_per_mk
    assert_covers(value, value * row.conductivity_spread_pct / 100.0, low, high)
    assert (row.basis == "from memory") == (source == MEMORY)


@pytest.mark.parametrize(("name", "published", "source"), CONDUCTIVITIES)
def test_conductivity_is_the_published_number(name, published, source):
    row = load_materials()[name]
    assert row.conductivity_w_per_mk == published
    assert (row.basis == "from memory") == (source == MEMORY)


def test_other_pure_aluminium_figure_lies_in_the_spread():
    # 236 W/(m K): the other figure of the textbook tables.
    row = load_materials()["aluminium_pure"]
    assert abs(row.conductivity_w_per_mk - 236.0) <= 2.37 * row.conductivity_spread_pct


@pytest.mark.parametrize("published", [92.0, 96.0])
def test_die_cast_aluminium_covers_its_alloys(published):
    # 92 W/(m K) for one and 96 for the other alloy of the class: from memory.
    row = load_materials()["aluminium_die_cast"]
    assert row.conductivity_w_per_mk == pytest.approx(
        published, rel=row.conductivity_spread_pct / 100
    )
    assert 92.0 <= row.conductivity_w_per_mk <= 96.0


def test_laminate_conducts_in_its_plane_as_published():
    # J. Electronic Materials 19 (1990) 1345: 1.059 in plane against 0.343 W/(m K) through.
    row = load_materials()["fr4"]
    assert row.in_plane_conductivity_w_per_mk == 1.059
    # Graebner & Azar, J. Heat Transfer 119 (1997) 401: about 3 times, bare laminate; "about" read as 10 %.
    ratio = row.in_plane_conductivity_w_per_mk / row.conductivity_w_per_mk
    assert ratio == pytest.approx(3.0, rel=0.10)


@pytest.mark.parametrize(("name", "low", "high", "source"), EMISSIVITY_RANGES)
def test_emissivity_covers_the_published_range(name, low, high, source):
    row = load_finishes()[name]
    assert_covers(row.emissivity, row.emissivity_spread, low, high)
    assert (row.basis == "from memory") == (source == MEMORY)


@pytest.mark.parametrize(("name", "published", "source"), EMISSIVITIES)
def test_emissivity_agrees_with_the_published_number(name, published, source):
    row = load_finishes()[name]
    assert abs(row.emissivity - published) <= row.emissivity_spread + ROUNDING
    assert row.basis == "published"


@pytest.mark.parametrize(("name", "published", "source"), SOLAR_ABSORPTIVITIES)
def test_solar_absorptivity_agrees_with_the_published_number(name, published, source):
    row = load_finishes()[name]
    assert abs(row.solar_absorptivity - published) <= row.solar_absorptivity_spread + ROUNDING
    assert (row.solar_basis == "from memory") == (source == MEMORY)


def test_every_published_row_is_checked_here():
    conductivity = {case[0] for case in [*CONDUCTIVITY_RANGES, *CONDUCTIVITIES]}
    emissivity = {case[0] for case in [*EMISSIVITY_RANGES, *EMISSIVITIES]}
    solar = {case[0] for case in SOLAR_ABSORPTIVITIES}
    assert {
        row.name for row in load_materials().values() if row.basis == "published"
    } <= conductivity
    assert {row.name for row in load_finishes().values() if row.basis == "published"} <= emissivity
    assert {row.name for row in load_finishes().values() if row.solar_basis == "published"} <= solar
