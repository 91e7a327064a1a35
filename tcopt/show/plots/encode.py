"""Figures to the bytes of files, the same bytes for the same figure."""

from __future__ import annotations

from io import BytesIO

from matplotlib.figure import Figure

from tcopt.show.plots.style import house

__all__ = ["encoded"]

_METADATA: dict[str, dict[str, str | None]] = {
    "svg": {"Date": None, "Creator": None},
    "png": {"Software": None},
}


def encoded(figure: Figure) -> dict[str, bytes]:
    """Return a figure as an SVG and as a PNG file, by 'svg' and 'png'."""
    files: dict[str, bytes] = {}
    with house():
        for kind, metadata in _METADATA.items():
            file = BytesIO()
            figure.savefig(file, format=kind, metadata=metadata)
            files[kind] = file.getvalue()
    return files
