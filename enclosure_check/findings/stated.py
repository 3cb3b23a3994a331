"""Records of what a document states beside its box: the power budget, and the part lists read."""

from __future__ import annotations

from typing import Annotated

from enclosure_check.findings.about import about as _about
from enclosure_check.records import dataclass


@dataclass(frozen=True)
class PowerBudgetFinding:
    """Power into the box less power out of it, against the heat of all that is listed."""

    power_in_w: Annotated[float, _about("Power put in, as stated. [W]")]
    power_out_w: Annotated[float, _about("Power delivered out of the box, as stated. [W]")]
    stays_w: Annotated[float, _about("In less out. [W]")]
    generated_w: Annotated[float, _about("Heat of all parts, boards and cables inside. [W]")]
    unexplained_w: Annotated[float, _about("What stays less that heat. [W]")]
    tolerance_w: Annotated[float, _about("Difference that is no warning. [W]")]
    agrees: Annotated[bool, _about("Whether the difference is within it.")]


@dataclass(frozen=True)
class PartListFinding:
    """A part list that was read."""

    name: Annotated[str, _about("Its name in the document.")]
    file: Annotated[str, _about("Its path, from where the document's path starts.")]
    digest: Annotated[str, _about("SHA-256 of its bytes.")]
    part_count: Annotated[int, _about("Parts in it.")]
