"""Bands: what those of the worst parts are made of, and readings beside predictions."""

from enclosure_check.findings.certainty import (
    ReadingBias,
    ReadingFinding,
    Sensitivities,
    Sensitivity,
)
from enclosure_check.findings.results import ConditionFinding, PartFinding
from enclosure_check.report.layout import Column, Page, Shown, counted, right, tenths

# Parts whose bands are taken apart, and causes named for each.
MOST_PARTS, MOST_CAUSES = 3, 4
# An effect smaller than this reads as none. [K]
_LEAST_K = 0.05


def write_bands(page: Page, condition: ConditionFinding) -> None:
    """Say how wide the bands are and what those of the smallest margins are made of."""
    if condition.air.mean_band_k is None:
        return
    page.gap()
    page.paragraph(_others(condition))
    points: dict[tuple[str, str], PartFinding] = {}
    for part in condition.parts:
        points.setdefault((part.name, part.limit_kind), part)
    lines = [words for part in list(points.values())[:MOST_PARTS] if (words := made_of(part))]
    if lines:
        page.heading("What the bands of the smallest margins are made of")
        page.bullets(page.clean(line) for line in lines)


def _others(condition: ConditionFinding) -> str:
    """Say how wide the bands of air and walls are."""
    air = condition.air
    bands = [band for band in (air.mean_band_k, air.top_band_k) if band is not None]
    walls = [wall.outside_band_k for wall in condition.walls if wall.outside_band_k is not None]
    low, high = tenths(min(walls)), tenths(max(walls))
    outside = f"+-{low}" if low == high else f"+-{low} to +-{high}"
    return (
        f"Bands at about 95 %: inside air, mean +-{tenths(bands[0])} K, at the top "
        f"+-{tenths(bands[-1])} K; walls outside {outside} K."
    )


def made_of(part: PartFinding) -> str:
    """Say what a part's band is made of; nothing where it has none."""
    causes = [
        f"{each.cause}, {each.half_width}: {each.effect_k:+.1f} K"
        for each in part.contributions[:MOST_CAUSES]
        if abs(each.effect_k) >= _LEAST_K
    ]
    if part.band_k is None or not causes:
        return ""
    return f"{part.name} {part.limit_kind} +-{tenths(part.band_k)} K: {'; '.join(causes)}"


# Readings ---------------------------------------------------------------------------------


def _inside(reading: ReadingFinding) -> str:
    return "-" if reading.inside_band is None else ("inside" if reading.inside_band else "OUTSIDE")


_READINGS = (
    Shown[ReadingFinding](Column("Run", yields=True), lambda row: row.run),
    Shown[ReadingFinding](Column("At", yields=True), lambda row: f"{row.name} {row.point}"),
    Shown[ReadingFinding](right("Measured C"), lambda row: tenths(row.measured_c)),
    Shown[ReadingFinding](
        right("Predicted C"),
        lambda row: (
            tenths(row.predicted_c) + ("" if row.band_k is None else f" +-{tenths(row.band_k)}")
        ),
    ),
    Shown[ReadingFinding](right("Difference K"), lambda row: tenths(row.difference_k)),
    Shown[ReadingFinding](Column("Band"), _inside, lambda row: row.inside_band is not None),
)
_KINDS = {"part": "parts", "wall": "walls", "air": "air"}


def write_readings(page: Page, condition: ConditionFinding) -> None:
    """Put readings beside predictions, and their bias by kind."""
    if condition.readings:
        page.gap()
        page.heading("Readings beside the prediction (difference: prediction less reading)")
        page.records(_READINGS, condition.readings)
        bias = "; ".join(bias_words(row) for row in condition.reading_bias)
        page.paragraph(f"Bias by kind: {bias}.", first="  ", rest="  ")


def bias_words(row: ReadingBias) -> str:
    """Say how far predictions of a kind are off in the mean."""
    return (
        f"{_KINDS[row.kind]} {row.mean_difference_k:+.1f} K in the mean of "
        f"{counted(row.count, 'reading')}, {row.rms_difference_k:.1f} K root mean square, "
        f"{row.inside_band} inside the band"
    )


# Sensitivities ----------------------------------------------------------------------------

_NUMBERS = (
    Shown[Sensitivity](Column("Number", yields=True), lambda row: row.path),
    Shown[Sensitivity](right("Is"), lambda row: f"{row.value:g}"),
    Shown[Sensitivity](
        right("K per %"),
        lambda row: "-" if row.margin_per_pct_k is None else f"{row.margin_per_pct_k:+.3f}",
    ),
    Shown[Sensitivity](right("K per unit"), lambda row: f"{row.margin_per_unit_k:+.3g}"),
    Shown[Sensitivity](Column("Unit"), lambda row: row.unit or "-"),
)


def write_sensitivities(page: Page, found: Sensitivities) -> None:
    """Say which numbers buy most margin."""
    page.gap()
    page.paragraph(
        page.clean(
            f"What more of a number does to the smallest margin of a part, {found.name} "
            f"{found.limit_kind} {found.limit_side} under {found.condition} (first order)"
        ),
        style="bold",
    )
    for words, kind in (("A designer's choice:", False), ("The installation:", True)):
        rows = [row for row in found.numbers if row.installation is kind]
        if rows:
            page.paragraph(words, first="  ", rest="  ")
            page.records(_NUMBERS, rows)
    if not found.numbers:
        page.paragraph("No number moves it.", first="  ", rest="  ")
