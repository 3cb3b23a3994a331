"""What the wind does at each face: its law in the range audit, and the regime by Gr/Re2."""

from enclosure_check.findings.ranges import range_finding
from enclosure_check.findings.results import RangeFinding
from enclosure_check.network.films import BoxFilm
from enclosure_check.network.links import FloatArray
from enclosure_check.network.wind import BoxFilmInWind
from enclosure_check.physics.air import air
from enclosure_check.physics.wind import PLATE_IN_WIND, regime
from enclosure_check.records import replace


def ranges_in_wind(
    kind: BoxFilm,
    rise: FloatArray,
    reference_k: FloatArray,
    names: dict[int, str],
    free: list[RangeFinding],
) -> list[RangeFinding]:
    """Add the law of the wind at each open face to the free ones there and of the whole box.

    The range of a law that adds next to nothing does not matter: that of the wind in the natural
    regime, and the free ones in the forced one.

    Parameters
    ----------
    kind
        The films of the box.
    rise
        Rises of its nodes [K], shape (7, v).
    reference_k
        Temperature the rises count from [K].
    names
        Surfaces by the number of their face.
    free
        Findings on its free films.
    """
    if not isinstance(kind, BoxFilmInWind):
        return free
    windy = {name: _in_wind(kind, rise, reference_k, k, name) for k, name in names.items()}
    forced = {name for name, row in windy.items() if row.regime == "forced"}
    whole = forced == set(windy)
    kept = [
        replace(row, inside_range=True, outside_by=1.0)
        if row.surface in forced or (whole and row.surface not in windy)
        else row
        for row in free
    ]
    return [*kept, *windy.values()]


def _in_wind(
    kind: BoxFilmInWind, rise: FloatArray, reference_k: FloatArray, face: int, name: str
) -> RangeFinding:
    """Give the law of the wind at one face; all groups with its length along the wind."""
    found, at = kind.wind_audit(rise, reference_k), (face, 0)
    over_air = float(rise[face, 0] - rise[6, 0])
    mean = float(reference_k[0] + 0.5 * (rise[face, 0] + rise[6, 0]))
    prandtl = float(air(mean, kind.pressure_pa).prandtl)
    reynolds, ratio = float(found.reynolds[at]), float(found.gr_over_re2[at])
    return range_finding(
        surface=f"{name} in wind",
        key=PLATE_IN_WIND,
        length=float(kind.wind.length[face]),
        rise=over_air,
        rayleigh=ratio * reynolds**2 * prandtl,
        prandtl=prandtl,
        nusselt=float(found.nusselt[at]),
        film=float(found.coefficient[at]),
        reynolds=reynolds,
        regime=regime(ratio),
    )
