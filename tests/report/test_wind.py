"""Wind in the text report: the site's line, the walls' table and what was assumed."""

import re

from support.cases import patched
from support.reports import SMALL, report_of

from enclosure_check.report.layout import cells_of
from enclosure_check.report.options import WriterOptions
from enclosure_check.report.text import write_text

WINDY = patched(
    SMALL,
    {
        "walls": {"back": {"mounting": {"kind": "against_surface", "gap_mm": 10}}},
        "requirements": {"touch_max_c": 60},
        "surroundings": {"sun_w_per_m2": {"top": 500}, "wind_m_per_s": 2.5},
    },
)


def test_still_air_says_nothing_of_wind(tmp_path):
    assert "wind" not in write_text(report_of(tmp_path), WriterOptions()).lower()


def test_wind_at_the_site_and_at_every_wall(tmp_path):
    text = write_text(report_of(tmp_path, WINDY), WriterOptions())
    assert max(map(cells_of, text.splitlines())) <= 80
    flat = " ".join(text.split())
    assert "Surrounding air 25.0 C, altitude 0 m, wind 2.5 m/s from any side." in flat
    assert "; forced, mixed, natural: convection of open air in wind)" in flat
    assert "still air is the hot case" in flat
    assert re.search(r"^  front +forced +\d", text, re.MULTILINE)
    assert re.search(r"^  back +surface +\d", text, re.MULTILINE)
    assert "open air" not in text[text.index("Walls (") : text.index("Heat in")].split(")", 1)[1]


def test_wind_from_a_side(tmp_path):
    document = patched(WINDY, {"surroundings": {"wind_from": "left"}})
    flat = " ".join(write_text(report_of(tmp_path, document), WriterOptions()).split())
    assert "wind 2.5 m/s from the left." in flat
