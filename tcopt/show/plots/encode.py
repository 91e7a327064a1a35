"""Figures to the bytes of files, the same bytes for the same figure."""

from __future__ import annotations

import warnings
from io import BytesIO

import matplotlib as mpl
from matplotlib.figure import Figure

from tcopt.show.plots.style import settings

__all__ = ["encoded"]

_METADATA: dict[str, dict[str, str | None]] = {
    "svg": {"Date": None, "Creator": None},
    "png": {"Software": None},
}


def encoded(figure: Figure) -> dict[str, bytes]:
    """Return a figure as an SVG and as a PNG file, by 'svg' and 'png'."""
    files: dict[str, bytes] = {}
    with mpl.rc_context(settings()), warnings.catch_warnings():
        # a title may be in a script that the font lacks; the picture is still of use
        warnings.filterwarnings("ignore", message="Glyph .* missing from font")
        for kind, metadata in _METADATA.items():
            file = BytesIO()
            figure.savefig(file, format=kind, metadata=metadata)
            files[kind] = file.getvalue()
    return files
