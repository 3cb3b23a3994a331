"""Writes the evidence page: ``python tests/published/evidence.py > docs/evidence.md``.

Every row sets a number that somebody else published, or that was worked out apart from the program,
beside ours. Rows we miss stay; nothing in the program is tuned to a row.
"""

import os
import sys
from collections.abc import Sequence
from functools import cache
from pathlib import Path

if __name__ == "__main__":
    # Matrices here are small: threads for linear algebra take many times what they save.
    os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")
    sys.path[:0] = [str(Path(__file__).resolve().parents[at]) for at in (2, 1)]

from published.evidence_row import KINDS, Count, Kind, Row, count
from published.rows_documents import document_rows
from published.rows_experiments import experiment_rows
from published.rows_laws import law_rows
from published.rows_network import network_rows
from published.rows_openings import loss_rows, stack_rows
from published.rows_surfaces import surface_rows

COMMAND = "python tests/published/evidence.py > docs/evidence.md"
WANTED_PCT = 90.0
# Marks a row that an accuracy was found from.
OWN = "†"
RUNGS = {
    1: (
        "Laws and properties",
        "A law with the source's own properties of air, or an exact formula: only arithmetic and "
        "the printed rounding can differ, so the band is 1 %. Beside measurements or other laws the "
        "band is the accuracy in the [register](method.md#register-of-laws).",
    ),
    2: (
        "One surface, one gap, one column",
        "The program's film or gap in its own air, so that the choice of law counts. Bands by the "
        "accuracy of the law, of upright plates with the doubt about their flow, where radiation "
        "shares the heat on the share of the film.",
    ),
    3: (
        "The network",
        "The program's cells, nodes and solver on problems with a known answer; band 1 %. Whole "
        "networks against an independently written assembly are tests, not rows "
        "(`tests/network/test_independent_assembly.py`).",
    ),
    4: (
        "Whole boxes",
        "Each box but the sealed ones of B, C and D (whose walls all are held, which no document "
        "can say) and the faces of X (by the law of the box) is a document in "
        "`tests/published/documents/`, run through the real command. Bands are those of the report: "
        "what the source gives is taken as exact, what it leaves open has the default tolerance. Of "
        "heat of single faces and shares of walls, of which a report has no band, they are the "
        "accuracies of our own forms.",
    ),
}
KIND_HEADS: dict[Kind, str] = {
    "measured": "measured",
    "numerical experiment": "numerical experiments",
    "worked example": "worked examples",
    "practice rule": "rules of practice",
}
SEEN = {"seen": "seen", "computed": "computed", "memory": "from memory"}

HEAD = f"""# Evidence

Written by `{COMMAND}`; a test keeps it current.

How the program does on numbers that others published or that were worked out apart from it. A row
that is missed stays on the page, and no constant of the program is tuned to one; what the shelter
factors of a box and the air inside rest on are the numerical experiments themselves, which are no
independent check of those ([method](method.md)). Only a few rows are measurements, nearly all of them
of laws; **no temperatures of a whole box with complete inputs were found in the open, so no measured
box is here**.

- *kind*: **measured** (a measurement, or a law through measurements), **numerical experiment** (made
  for this project: laminar free convection of air solved on fine grids with a general-purpose flow
  solver), **worked example** (a textbook's example, a library's value or an exact solution),
  **practice rule** (a rule of the trade, which may be wrong).
- *seen*: the number was read in the source or in a published reprint of its worked example;
  *computed*: worked out from published inputs or a published formula, apart from the program;
  *from memory*: recalled and not looked up.
- *error*: ours less theirs, in percent of theirs, or of what the row names: shares in points of the
  whole; slices of air in percent of the board's rise, of F in percent of the outlet's; edges of the
  plate of bare laminate in percent of its mean.
- *band*: half-width of our band at about 95 %, in the unit of the row. *inside*: theirs lies in ours
  with its band. What theirs is uncertain by is not added, but for a range or a printed rounding that
  the table shows.
- {OWN}: the accuracy that the band rests on was found from this row itself among others, by
  [one rule for all](method.md#accuracies-of-our-own-forms): **such a row is no independent check of its
  band**, only of its best estimate.
"""

NOT_HERE = """## What is not here

- Fins, heat sinks, annuli, cylinders across the wind (film 10.83 W/m2K of Sukhatme, example 6.6) and
  annular fins: the program has no law for them.
- Tamayol, McGregor & Bahrami (2012), Teertstra, Yovanovich & Culham (2006), Witzman, Nicoletta & Mack
  (1998), Coyne (1982), Silva et al. (2017), Miyamoto et al. (1984), Nishino et al. (2009): boxes and
  cards measured or modelled, whose sizes, powers and temperatures together could not be seen. Of the
  first only a share of radiation is used.
- The vented card box of 1997: only its sizes and its formula were seen, not its measurements.
- A board alone in open air as a document: a document is a box.
"""


@cache
def every_row() -> tuple[Row, ...]:
    """All rows of the page."""
    return (
        *law_rows(),
        *loss_rows(),
        *stack_rows(),
        *surface_rows(),
        *network_rows(),
        *document_rows(),
        *experiment_rows(),
    )


def digits(value: float) -> str:
    """Give a number with four significant digits, a tiny one with one."""
    if abs(value) < 5e-4:
        return f"{value:.1g}" if abs(value) >= 5e-5 else "0"
    places = max(0, 3 - int(f"{value:.3e}".partition("e")[2]))
    return f"{value:.{places}f}"


def signed(error: float | None) -> str:
    """Give an error with its sign and a tenth of a percent; none of a flag."""
    return "-" if error is None else f"{round(error, 1) + 0.0:+.1f}"


def theirs(row: Row) -> str:
    """Give their number, range or what ours has to pass."""
    low, high = row.theirs
    if row.flag:
        return f"above {low:g}"
    return f"{low:.5g}" if low == high else f"{low:.5g} to {high:.5g}"


def line(row: Row) -> str:
    """Give one row of a table."""
    cells = (
        row.case,
        f"{row.source.short}, {row.place}; {SEEN[row.seen]}",
        row.quantity + (f" {OWN}" if row.own else ""),
        theirs(row),
        digits(row.ours),
        signed(row.error_pct),
        "-" if row.flag else f"{row.band:.2g}",
        "yes" if row.inside else "**no**",
        row.why,
    )
    return "| " + " | ".join(cells) + " |"


def table(rows: Sequence[Row]) -> list[str]:
    """Give a table of rows."""
    head = ("case", "source", "quantity", "theirs", "ours", "error %", "band ±", "inside", "why")
    return [
        "| " + " | ".join(head) + " |",
        "|" + " --- |" * len(head),
        *(line(row) for row in rows),
    ]


def sums(found: Count) -> tuple[str, str, str, str]:
    """Give rows, inside, error and the worst row of a count as cells."""
    rms = "-" if found.rms_pct is None else f"{found.rms_pct:.1f}"
    worst = (
        "-" if found.worst is None else f"{name(found.worst)} ({signed(found.worst.error_pct)} %)"
    )
    return str(found.rows), f"{found.inside} ({found.share_pct:.0f} %)", rms, worst


def name(row: Row) -> str:
    """Give case and quantity of a row, with a source where one case has several."""
    return f"{row.case}, {row.quantity}, {row.source.short}"


def summary(rows: Sequence[Row]) -> list[str]:
    """Give the table of counts by rung and kind."""
    lines = [
        "## In short",
        "",
        "| rung | kind | rows | inside | root mean square error % | worst |",
        "|" + " --- |" * 6,
    ]
    for rung in RUNGS:
        for kind in KINDS:
            own = [row for row in rows if (row.rung, row.kind) == (rung, kind)]
            if own:
                lines.append(f"| {rung} | {kind} | " + " | ".join(sums(count(own))) + " |")
    return [*lines, "", *verdict(rows), ""]


def verdict(rows: Sequence[Row]) -> list[str]:
    """Tell whether what was wanted is reached, also where it is not."""
    lines = []
    for kind in ("numerical experiment", "worked example"):
        found = count(row for row in rows if row.kind == kind)
        reached = "reached" if found.share_pct >= WANTED_PCT else "**not reached**"
        lines.append(
            f"- Wanted: {WANTED_PCT:.0f} % of the rows of kind *{kind}* inside the band. "
            f"{found.inside} of {found.rows} are, {found.share_pct:.0f} %: {reached}."
        )
        if any(row.own for row in rows if row.kind == kind):
            others = count(row for row in rows if row.kind == kind and not row.own)
            lines.append(
                f"  {found.rows - others.rows} of them are marked {OWN}: their bands were found so that "
                f"most lie inside. Of the {others.rows} others {others.inside} do, "
                f"{others.share_pct:.0f} %."
            )
    own = count(row for row in rows if row.kind == "worked example" and row.rung in (2, 4))
    lines.append(
        f"- Worked examples where a choice of law or a model counts (rungs 2 and 4): {own.inside} "
        f"of {own.rows}, {own.share_pct:.0f} %. Every one more than 3 % off in rung 2 says why."
    )
    return lines


def totals(rows: Sequence[Row]) -> str:
    """Give the last line: the counts by kind."""
    parts = []
    for kind in KINDS:
        number, inside, rms, worst = sums(count(row for row in rows if row.kind == kind))
        parts.append(f"{kind}: {number} rows, {inside} inside, rms {rms} %, worst {worst}")
    return "**Totals.** " + "; ".join(parts) + "."


def sources(rows: Sequence[Row]) -> list[str]:
    """Give the list of all publications cited."""
    found = {row.source.short: row.source.full for row in rows}
    cited = [f"- {short}: {found[short]}" for short in sorted(found, key=str.casefold)]
    return ["## Sources", "", "Editions and years of textbooks are from memory.", "", *cited, ""]


def evidence_page() -> str:
    """Write the page."""
    rows = every_row()
    lines = [HEAD, *summary(rows)]
    for rung, (title, about) in RUNGS.items():
        lines += [f"## Rung {rung}: {title}", "", about, ""]
        for kind in KINDS:
            own = [row for row in rows if (row.rung, row.kind) == (rung, kind)]
            if own:
                lines += [f"### Rung {rung}, {KIND_HEADS[kind]}", "", *table(own), ""]
    return "\n".join([*lines, NOT_HERE, *sources(rows), totals(rows)]) + "\n"


if __name__ == "__main__":
    sys.stdout.write(evidence_page())
