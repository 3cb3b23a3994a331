"""Where the resolving steps put what they find: errors, warnings and assumptions."""

from enclosure_check.description.case import Note
from enclosure_check.description.problems import FieldErrors, FieldProblem, nearest
from enclosure_check.records import dataclass, field

Path = tuple[str | int, ...]

# What "close to" means when lengths from a drawing are compared. [mm]
ROUNDING_MM = 1e-6
# Errors told before unknown names are no longer compared with known ones.
MOST_SPELLINGS = 100
# Errors after which a document is given up.
MOST_ERRORS = 500
# Parts heaped on one spot overlap by pairs without end; nobody reads on after so many. [-]
MOST_WARNINGS = 100


@dataclass
class Remarks:
    """Collects while one case is resolved; ``finish`` raises when there was any error."""

    errors: list[FieldProblem] = field(default_factory=list)
    warnings: list[Note] = field(default_factory=list)
    _assumed: dict[str, list[str]] = field(default_factory=dict)

    def error(self, path: Path, message: str) -> None:
        """Record an error at a field."""
        self.errors.append(FieldProblem(path, message))
        if len(self.errors) == MOST_ERRORS:
            self.errors.append(FieldProblem((), "too many problems; stopped here"))
            self.finish()

    def warn(self, path: Path, message: str) -> None:
        """Record a warning at a field."""
        self.warnings.append(Note(path, message))

    def assume(self, what: str, of: str = "") -> None:
        """Record that ``what`` was assumed, ``of`` naming one thing it was assumed of."""
        names = self._assumed.setdefault(what, [])
        if of:
            names.append(of)

    def unknown(self, path: Path, what: str, given: str, known: list[str]) -> None:
        """Record a name that stands for nothing, with the nearest that does."""
        # To look for the nearest spelling takes milliseconds; nobody reads a hundred of them.
        near = nearest(given, known) if len(self.errors) < MOST_SPELLINGS else ""
        self.error(path, f"given {given!r}, which is no {what}{near}")

    def assumptions(self) -> tuple[str, ...]:
        """Give one line per assumption, naming what it was made of."""
        return tuple(
            f"{what} ({_listed(names)})" if names else what for what, names in self._assumed.items()
        )

    def finish(self) -> None:
        """Raise every error found.

        Raises
        ------
        FieldErrors
            When there was any.
        """
        if self.errors:
            raise FieldErrors(self.errors)


def _listed(names: list[str], most: int = 6) -> str:
    unique = list(dict.fromkeys(names))
    if len(unique) <= most:
        return ", ".join(unique)
    return ", ".join(unique[:most]) + f" and {len(unique) - most} more"
