"""Solving a network: the steady state, and sensitivities of it."""
