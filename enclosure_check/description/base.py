"""What every model of the document shares: strictness, names and bounded numbers."""

from typing import Annotated, Any, ClassVar

from pydantic import BaseModel, BeforeValidator, ConfigDict, Field, StringConstraints
from pydantic_core import PydanticCustomError

Name = Annotated[str, StringConstraints(min_length=1, max_length=80)]
Text = Annotated[str, StringConstraints(max_length=2000)]

# Bounds are those of sense, not of physics: they catch a slipped unit or decimal point.
LengthMm = Annotated[float, Field(gt=0, le=10_000)]
DistanceMm = Annotated[float, Field(ge=0, le=10_000)]
CoordinateMm = Annotated[float, Field(ge=-10_000, le=10_000)]
TemperatureC = Annotated[float, Field(ge=-150, le=500)]
AmbientC = Annotated[float, Field(ge=-90, le=150)]
PowerW = Annotated[float, Field(ge=0, le=100_000)]
PercentUpTo100 = Annotated[float, Field(ge=0, le=100)]
ThermalResistanceKPerW = Annotated[float, Field(ge=0, le=100_000)]
ConductivityWPerMK = Annotated[float, Field(gt=0, le=5_000)]
ContactWPerM2K = Annotated[float, Field(gt=0, le=1_000_000)]
IrradianceWPerM2 = Annotated[float, Field(ge=0, le=2_000)]
AngleDeg = Annotated[float, Field(ge=-180, le=180)]


def _refuse_boolean(value: Any) -> Any:
    if isinstance(value, bool):
        raise PydanticCustomError("boolean_type", "a truth value is no number")
    return value


# For literal numbers: to Python false equals 0 and true equals 1.
NotBoolean = BeforeValidator(_refuse_boolean)


class Strict(BaseModel):
    """Base of every model: no unknown keys, no silent conversion, no NaN, never changed.

    ``NOT_YET`` names keys that belong to the document's vocabulary but are not computed in
    this version, each with what to do instead; the loader answers them with a message of
    their own rather than "unknown key".
    """

    model_config = ConfigDict(
        extra="forbid", strict=True, frozen=True, allow_inf_nan=False, hide_input_in_errors=True
    )
    NOT_YET: ClassVar[dict[str, str]] = {}
