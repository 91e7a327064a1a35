"""Figures of speed and size, measured as ratios in one run: ``python -m tests.bench``."""
