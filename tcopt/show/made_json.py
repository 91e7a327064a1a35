"""What `design` adds to its document: sizes, what silicon makes of designs, drift against area."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from collections.abc import Callable

    from tcopt.assess import Assessment, Verdict
    from tcopt.design import DesignResult
    from tcopt.mix.made import SizeFigures
    from tcopt.mix.sampled import Compared, SiliconFigures
    from tcopt.study import Part

__all__ = ["front_document", "made_document", "part_sizes", "silicon_document"]

Document = dict[str, Any]


def part_sizes(part: Part) -> Document:
    """Return how a part is drawn; nothing where that is not known."""
    if part.width is None:
        return {}
    if part.length is None:
        return {"width_m": part.width}
    return {
        "width_m": part.width,
        "length_m": part.length,
        "squares": part.squares,
        "series": part.series,
        "parallel": part.parallel,
        "segments": part.series * part.parallel,
        "area_m2": part.area_taken(0.0),
    }


def made_document(
    result: DesignResult, index: int, limit: Callable[[Verdict], Document]
) -> Document:
    """Return what is told beside one design: its sizes, and what silicon makes of it."""
    found: Document = {}
    if result.sizes:
        found["sizes"] = _sizes(result.sizes[index])
    if result.silicon is not None:
        found["silicon"] = _figures(result.silicon.figures[index], limit)
    return found


def _sizes(sizes: SizeFigures) -> Document:
    return {
        "area_m2": sizes.area,
        "segments": sizes.segments,
        "mismatch": sizes.mismatch,
        "tolerance": sizes.tolerance,
        "tolerance_deviation_ppm": sizes.tolerance_deviation_ppm,
        "tolerance_box_ppm_per_K": sizes.tolerance_box_ppm_per_K,
    }


def _figures(figures: SiliconFigures, limit: Callable[[Verdict], Document]) -> Document:
    return {
        "parts": figures.parts,
        "box_ppm_per_K": figures.box_ppm_per_K,
        "median_box_ppm_per_K": figures.median_box_ppm_per_K,
        "untrimmed_box_ppm_per_K": figures.untrimmed_box_ppm_per_K,
        "deviation_ppm": figures.deviation_ppm,
        "spread": figures.spread,
        "beyond_trim": figures.beyond_trim,
        "limit": figures.limit and limit(figures.limit),
    }


def silicon_document(
    result: DesignResult,
    design: Callable[[Assessment], Document],
    limit: Callable[[Verdict], Document],
) -> Document:
    """Return what a search for silicon tells of all designs; nothing where there was none."""
    silicon = result.silicon
    if silicon is None:
        return {}

    def compared(found: Compared | None) -> Document | None:
        if found is None:
            return None
        return design(found.found) | {"silicon": _figures(found.silicon, limit)}

    return {
        "silicon": {
            "quantile": silicon.quantile,
            "sigma": silicon.sigma,
            "trimmed": silicon.trimmed,
            "bound": {
                "deviation_ppm": 1e6 * silicon.bound.deviation,
                "proven": silicon.bound.proven,
            },
            "paper_optimum": compared(silicon.paper),
            "best_single_material": compared(silicon.single),
            "causes": list(silicon.causes),
        }
    }


def front_document(
    result: DesignResult,
    design: Callable[[Assessment], Document],
    limit: Callable[[Verdict], Document],
) -> Document:
    """Return the front of drift against area; nothing where there is none."""
    if not result.front:
        return {}
    return {
        "front": [
            design(point.found)
            | {"area_m2": point.area}
            | ({} if point.silicon is None else {"silicon": _figures(point.silicon, limit)})
            for point in result.front
        ]
    }
