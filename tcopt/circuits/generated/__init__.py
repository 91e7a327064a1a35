"""Numerics made from the statements."""
