"""The heat of a part from what is stated: its power, or a converter's output and efficiency."""

from collections.abc import Callable
from typing import Any

from enclosure_check.description.remarks import Path, Remarks


def stated_power(
    pick: Callable[[str], Any], where: Callable[[str], Path], remarks: Remarks
) -> float | None:
    """Give the power turned to heat before modes are looked at [W], None when none is stated.

    A converter that gives out ``output_w`` at ``efficiency_pct`` turns
    ``output_w (100 / efficiency_pct - 1)`` into heat.

    Parameters
    ----------
    pick
        Gives a key's value, of the part or else of its type.
    where
        Gives the path at which that value stands.
    remarks
        Where errors go.
    """
    power, output, efficiency = pick("power_w"), pick("output_w"), pick("efficiency_pct")
    if output is None and efficiency is None:
        return None if power is None else float(power)
    for key, value, other in (
        ("output_w", output, "efficiency_pct"),
        ("efficiency_pct", efficiency, "output_w"),
    ):
        if value is None:
            remarks.error(where(key), f"missing; it goes with `{other}`")
    if output is None or efficiency is None:
        return None
    if power is not None:
        remarks.error(
            where("power_w"), "given together with `output_w`; give one of them, or none here"
        )
        return None
    return float(output * (100.0 / efficiency - 1.0))
