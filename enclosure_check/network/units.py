"""The one place where millimetres and degrees Celsius become metres and kelvin, and back."""

from enclosure_check.description.frames import Vector

ZERO_CELSIUS_K = 273.15


def metres(size_mm: float) -> float:
    """Convert a length from mm to m."""
    return size_mm * 1e-3


def millimetres(size: float) -> float:
    """Convert a length from m to mm."""
    return size * 1e3


def metres_3(size_mm: Vector) -> Vector:
    """Convert three lengths from mm to m."""
    return (size_mm[0] * 1e-3, size_mm[1] * 1e-3, size_mm[2] * 1e-3)


def kelvin(temperature_c: float) -> float:
    """Convert a temperature from Celsius to K."""
    return temperature_c + ZERO_CELSIUS_K


def celsius(temperature_k: float) -> float:
    """Convert a temperature from K to Celsius."""
    return temperature_k - ZERO_CELSIUS_K
