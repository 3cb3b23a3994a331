"""What an opening of a case loses, by the laws of `physics.openings`: from mm to SI."""

from enclosure_check.description.case import OpeningCase
from enclosure_check.network.units import metres
from enclosure_check.physics.openings import (
    CONTRACTION_LEFT,
    ROUND_FRICTION,
    cut_out_loss,
    duct_friction,
    mesh_loss,
    mesh_viscous_loss,
    plate_loss,
    viscous_loss,
)
from enclosure_check.records import dataclass


@dataclass(frozen=True)
class OpeningLoss:
    """Loss of an opening: ``(loss + viscous / Re) rho v^2 / 2 + filter_pa_s_per_m v``.

    The velocity v is that in the free area, the Reynolds number that of ``hole_m``.
    """

    free_area_m2: float
    """All that is open, 0 when it is closed."""
    hole_m: float
    """Hydraulic diameter of one hole."""
    loss: float
    """K of inlet and outlet together, without what viscosity adds [-]."""
    viscous: float
    """C of what viscosity adds [-]."""
    filter_pa_s_per_m: float


def opening_loss(opening: OpeningCase) -> OpeningLoss:
    """Give what an opening loses, from what it is.

    Holes of an area are a plate in series with the cut-out that the area is: the plate's loss on
    the velocity v in the holes, the cut-out's on that of the whole area, f v. A mesh over an
    opening is one more in series. Holes lose what they do in free convection, where little is left
    of the contraction.

    Parameters
    ----------
    opening
        The opening, closed or not: what is blocked takes area and changes no loss.
    """
    share = opening.free_share
    length_ratio = opening.thickness_mm / opening.hole_mm
    round_or_square = opening.hole_aspect is None
    friction = ROUND_FRICTION if round_or_square else float(duct_friction(opening.hole_aspect or 0))
    rim_ratio = opening.thickness_mm / opening.area_mm
    rim = float(cut_out_loss(rim_ratio, CONTRACTION_LEFT)) * share**2
    loss = viscous = 0.0
    if opening.kind != "mesh":
        # A cut-out has no plate: its share is 1.
        loss = float(plate_loss(share, length_ratio, CONTRACTION_LEFT))
        viscous = float(viscous_loss(length_ratio, friction))
    loss = loss + rim if opening.stated_loss is None else opening.stated_loss
    if opening.screen is not None:
        mesh = opening.screen
        # Velocity in front of the mesh, and between its wires, over that in the free area.
        front = share
        between = front / mesh.free_share
        # A mesh that is the opening itself has a stated loss in it already.
        if opening.kind != "mesh" or opening.stated_loss is None:
            loss += float(mesh_loss(mesh.free_share)) * front**2
        wires = between * mesh.wire_mm / opening.hole_mm
        viscous += float(mesh_viscous_loss(mesh.free_share)) * front**2 / wires
    return OpeningLoss(
        free_area_m2=opening.free_area_mm2 * metres(1.0) ** 2,
        hole_m=metres(opening.hole_mm),
        loss=loss,
        viscous=viscous,
        filter_pa_s_per_m=opening.filter_pa_s_per_m,
    )
