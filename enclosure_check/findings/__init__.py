"""Findings: what a solved case says about limits, heat, ranges and margins."""
