"""Passive cooling of electronics enclosures, checked from a YAML description."""

__version__ = "0.1.0"
