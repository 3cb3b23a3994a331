"""What a data sheet of a law says; the register itself is `physics/correlation.py`."""

from __future__ import annotations

from typing import Literal

from enclosure_check.records import dataclass

STATED = "stated by the authors"
SCATTER = "scatter against independent data"
EXPERIMENT = "scatter against numerical experiments made for this project"
MEMORY = "from memory"


@dataclass(frozen=True)
class Correlation:
    """Data sheet of a law."""

    key: str
    """Name in the registry and in reports."""
    name: str
    """Name for a reader."""
    equation: str
    """Equation as text."""
    characteristic_length: str
    """Length in the Rayleigh and Nusselt numbers."""
    variable: Literal["rayleigh", "elenbaas", "reynolds", "stratification", "temperature", "none"]
    """Group that the range is given in."""
    valid_from: float
    """Lower end of the range of that group [-], or [K] for a temperature."""
    valid_to: float
    """Upper end of the range of that group [-], or [K] for a temperature."""
    prandtl_from: float
    """Lower end of the Prandtl number [-]."""
    prandtl_to: float
    """Upper end of the Prandtl number [-]."""
    accuracy_pct: float
    """Half-width of the band that holds about 95 % of data [%]."""
    accuracy_basis: str
    """Where the accuracy comes from."""
    reference: str
    """Author, year, title, journal."""
