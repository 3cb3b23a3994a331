"""The text that explains one part: the tree of its heat, the laws in it, and what heats it."""

from enclosure_check.findings.explanation import (
    ExplainedReport,
    Explanation,
    LinkHeat,
    LinkLaw,
    PowerCost,
    ThingHeat,
    TreeStep,
)
from enclosure_check.findings.results import Report
from enclosure_check.records import dataclass
from enclosure_check.report.layout import (
    Column,
    Page,
    Shown,
    cells_of,
    cut,
    digits,
    listed,
    right,
    tenths,
    watts,
)
from enclosure_check.report.limits import WORDS
from enclosure_check.report.options import WriterOptions

# Sources of heat shown, and things told of what heats them.
MOST_POWERS, MOST_HEATED, MOST_SOURCES = 8, 8, 5
# A source below the one is not named; where one brings more than the other, nothing comes together.
_LEAST_PCT, _ONE_SOURCE_PCT = 1.0, 95.0
# From this width on the change of conductance is shown too.
WIDE = 100
AGAIN, OUTSIDE_RANGE = "^", "!"


def write_explanation(report: Report, options: WriterOptions) -> str:
    """Give the explanation in a report as plain text.

    Raises
    ------
    ValueError
        When the report explains nothing.
    """
    found = report.explain if isinstance(report, ExplainedReport) else None
    if found is None:
        raise ValueError("the report explains no part")
    page = Page(options)
    page.heading(page.clean(report.title))
    page.paragraph(page.clean(report.document))
    page.paragraph(f"Check: {WORDS[report.verdict]}.", style=report.verdict)
    page.gap()
    page.heading(page.clean(_headline(found)))
    page.heading("-" * options.width, "")
    if found.heat_w <= 0:
        page.paragraph("No heat to speak of passes it.")
    else:
        _explained(page, found)
    page.gap()
    page.paragraph(f"Caution: {report.caution}")
    return page.text()


def _explained(page: Page, found: Explanation) -> None:
    page.paragraph(page.clean(_what(found)))
    page.gap()
    laws = _Laws()
    _tree(page, found, laws)
    page.gap()
    page.paragraph(page.clean(_legend(found)))
    laws.write(page)
    _heated(page, found)
    page.gap()
    shares = [f"{page.clean(end.name)} {_pct(end.share_pct)}" for end in found.ends]
    page.paragraph(f"Its heat leaves at last to: {', '.join(shares)}.", rest="  ")
    _powers(page, found)


def _headline(found: Explanation) -> str:
    words = f"{found.part} under {found.condition}: {found.point} {tenths(found.temperature_c)} C"
    if found.limit_c is None or found.margin_k is None:
        return f"{words}, no limit stated"
    side = "highest" if found.limit_side == "max" else "lowest"
    return f"{words}, {side} allowed {tenths(found.limit_c)} C, margin {tenths(found.margin_k)} K"


def _what(found: Explanation) -> str:
    root = next(thing for thing in found.things if thing.name == found.root)
    own = f"{watts(root.put_in_w)} W of its own"
    brought = [
        f"{watts(source.heat_w)} W from {source.name}"
        for source in root.heated_by
        if source.name != found.root
    ]
    return f"{watts(found.heat_w)} W pass it: {listed([own, *brought])}."


# The tree ---------------------------------------------------------------------------------


class _Laws:
    """Laws as they come up, numbered, with all links that follow them."""

    def __init__(self) -> None:
        self._numbers: dict[tuple[str | None, str], int] = {}
        self._used: dict[int, list[LinkLaw]] = {}

    def mark(self, laws: tuple[LinkLaw, ...]) -> str:
        """Give the numbers of some laws, those outside their range marked."""
        marks = []
        for law in laws:
            number = self._numbers.setdefault((law.key, law.name), len(self._numbers) + 1)
            self._used.setdefault(number, []).append(law)
            marks.append(f"{number}{OUTSIDE_RANGE if law.inside_range is False else ''}")
        return f"[{','.join(marks)}]" if marks else ""

    def write(self, page: Page) -> None:
        """Put the laws in, by number."""
        page.gap()
        page.heading("Laws")
        for number, used in self._used.items():
            page.paragraph(_law_words(used), first=f"  [{number}] ", rest="      ")


def _law_words(used: list[LinkLaw]) -> str:
    law = used[0]
    words = [law.name + ("" if law.key is None else f" ({law.key})")]
    films = [film for each in used if each.films_w_per_m2k for film in each.films_w_per_m2k]
    if films:
        low, high = digits(min(films)), digits(max(films))
        words.append(f"h {low if low == high else f'{low} to {high}'} W/m2K")
    audited = [each for each in used if each.inside_range is not None]
    beyond = [each for each in audited if not each.inside_range]
    if beyond:
        furthest = max(beyond, key=_beyond)
        every = len(beyond) == len(used)
        where = "" if every else f" where marked {OUTSIDE_RANGE}"
        words.append(
            f"outside its range{where}, furthest at {digits(furthest.outside_by or 1.0)} of its end"
        )
    elif audited:
        words.append("inside its range")
    elif law.key is not None:
        words.append("its range is not audited here")
    return "; ".join(words)


def _beyond(law: LinkLaw) -> float:
    by = law.outside_by or 1.0
    return max(by, 1.0 / max(by, 1e-300))


@dataclass(frozen=True)
class _Line:
    """One line of the tree: what stands before the numbers, and the numbers."""

    text: str
    numbers: tuple[str, ...]


def _tree(page: Page, found: Explanation, laws: _Laws) -> None:
    wide = page.options.width >= WIDE
    titles = ("C", "W", "%", "K", "1 K: R", *(("W/K",) if wide else ()))
    things = {thing.name: thing for thing in found.things}
    root = things[found.root]
    blank = ("",) * (len(titles) - 1)
    lines = [_Line(page.clean(root.name), (tenths(root.temperature_c), *blank))]
    for place, step in enumerate(found.tree):
        link = found.links[step.link]
        lead = _lead(found.tree, place)
        text = lead + page.clean(_named(step, link)) + (f" {AGAIN}" if step.again else "")
        text += f" {laws.mark(link.laws)}" if link.laws else ""
        lines.append(_Line(text.rstrip(), _numbers(step, link, things, wide)))
    widths = [
        max(len(title), *(len(line.numbers[at]) for line in lines)) + 2
        for at, title in enumerate(titles)
    ]
    room = page.options.width - sum(widths)
    heads = "".join(title.rjust(width) for title, width in zip(titles, widths, strict=True))
    page.heading(f"{'':{room}}{heads}")
    for line in lines:
        shown = cut(line.text, room)
        pad = " " * (room - cells_of(shown))
        numbers = "".join(
            text.rjust(width) for text, width in zip(line.numbers, widths, strict=True)
        )
        page.line(f"{shown}{pad}{numbers}")


def _lead(tree: tuple[TreeStep, ...], place: int) -> str:
    """Draw the branches that lead to a line: a bar where more of the same depth follows."""
    depth = tree[place].depth
    bars = []
    for level in range(depth):
        later = next((step for step in tree[place + 1 :] if step.depth <= level), None)
        bars.append("| " if later is not None and later.depth == level else "  ")
    return "".join(bars) + ("<-" if tree[place].inward else "+-")


def _named(step: TreeStep, link: LinkHeat) -> str:
    if link.start == link.end:
        return f"({link.way})"
    return f"{link.start if step.inward else link.end}: {link.way}"


def _numbers(
    step: TreeStep, link: LinkHeat, things: dict[str, ThingHeat], wide: bool
) -> tuple[str, ...]:
    thing = things[link.start if step.inward else link.end]
    change = link.one_kelvin_resistance_pct
    more = link.one_kelvin_w_per_k
    numbers = [
        "" if link.start == link.end else tenths(thing.temperature_c),
        "" if link.heat_w is None else watts(link.heat_w),
        "" if link.share_pct is None else _plain_pct(link.share_pct),
        "" if link.drop_k is None else tenths(link.drop_k),
        "-" if change is None else f"{change:+.0f} %",
    ]
    if wide:
        numbers.append("-" if more is None else f"{more:+.3g}")
    return tuple(numbers)


def _plain_pct(value: float) -> str:
    return f"{value:.0f}" if value >= 0.5 else "<1"


def _pct(value: float) -> str:
    return f"{_plain_pct(value)}%"


def _legend(found: Explanation) -> str:
    return (
        f"C: of the thing (its mean). W: all heat that goes this way. %: of {found.part}'s heat, "
        "the heat in each thing taken as mixed. K: difference of the two. 1 K: R: how far "
        "the resistance of this way alone has to change for 1 K more margin, estimated from the "
        "slope and bend there; -: not by a factor of four. "
        f"{AGAIN}: followed elsewhere. <-: brings heat. {OUTSIDE_RANGE}: law outside its range. "
        f"Left out: ways that carry less than {found.pruned_below_pct:.0f} % of the heat and "
        "matter less than that beside the strongest."
    )


# What heats it ----------------------------------------------------------------------------


def _heated(page: Page, found: Explanation) -> None:
    """Say what comes together in the things that are followed."""
    followed = [
        found.links[step.link].start if step.inward else found.links[step.link].end
        for step in found.tree
        if not step.again
    ]
    things = {thing.name: thing for thing in found.things}
    told = [
        things[name]
        for name in dict.fromkeys(followed)
        if not things[name].outside
        and things[name].heated_by
        and things[name].heated_by[0].share_pct < _ONE_SOURCE_PCT
    ]
    if not told:
        return
    page.gap()
    page.heading("What comes together")
    for thing in told[:MOST_HEATED]:
        sources = [
            f"{'itself' if source.name == thing.name else source.name} {_pct(source.share_pct)}"
            for source in thing.heated_by
            if source.share_pct >= _LEAST_PCT
        ]
        total = watts(thing.in_w + max(thing.put_in_w, 0.0))
        words = f"{thing.name}, {total} W: {listed(sources, MOST_SOURCES)}"
        page.paragraph(page.clean(words), first="  ", rest="    ")


_POWERS = (
    Shown[PowerCost](
        Column("Source", yields=True),
        lambda row: row.name + (", sun" if row.kind == "sun" else ""),
    ),
    Shown[PowerCost](right("W"), lambda row: watts(row.heat_w)),
    Shown[PowerCost](right("Adds K"), lambda row: tenths(row.adds_k)),
    Shown[PowerCost](right("K/W"), lambda row: digits(row.k_per_w)),
    Shown[PowerCost](
        right("1 K: W"),
        lambda row: "-" if row.one_kelvin_w is None else f"{row.one_kelvin_w:+.2g}",
    ),
)


def _powers(page: Page, found: Explanation) -> None:
    page.gap()
    page.paragraph(
        "What heats it (adds: heat times K/W at this state; 1 K: change of this heat alone for "
        "1 K more margin; -: all of it gives less)",
        style="bold",
    )
    page.records(_POWERS, found.powers[:MOST_POWERS])
    rest = found.powers[MOST_POWERS:]
    if rest:
        added = tenths(sum(row.adds_k for row in rest))
        page.paragraph(f"and {len(rest)} more that add {added} K", first="  ", rest="  ")
