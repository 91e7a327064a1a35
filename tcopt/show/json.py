"""Results as JSON documents: fixed keys that carry their unit, numbers in SI or in ppm."""

from __future__ import annotations

import json
import math
from collections.abc import Mapping, Sequence
from typing import TYPE_CHECKING, Any

from tcopt.assess import Assessment, Verdict
from tcopt.drift import Drift
from tcopt.operation import Mix, Operation
from tcopt.show.devices_json import devices_document
from tcopt.show.made_json import front_document, made_document, part_sizes, silicon_document
from tcopt.traps import warnings_for

if TYPE_CHECKING:
    from tcopt.check import CheckResult
    from tcopt.design import DesignResult
    from tcopt.menu import Menu
    from tcopt.study import Study

__all__ = [
    "Document", "check_document", "choices_document", "design_document", "figures_document",
    "json_text", "limit_document", "menu_document", "mix_document", "study_heading",
]  # fmt: skip

Document = dict[str, Any]


def json_text(document: Mapping[str, Any]) -> str:
    """Return a document as JSON text with a newline at its end; what is not finite is null."""
    return json.dumps(_finite(document), indent=2, allow_nan=False) + "\n"


def _finite(value: Any) -> Any:
    if isinstance(value, float):
        return value if math.isfinite(value) else None
    if isinstance(value, Mapping):
        return {key: _finite(item) for key, item in value.items()}
    if isinstance(value, Sequence) and not isinstance(value, str):
        return [_finite(item) for item in value]
    return value


def check_document(result: CheckResult) -> Document:
    """Return what `check` found; the sensitivities stand in the order of ``budget``."""
    found = result.assessment
    return {
        **study_heading(result.study),
        "temperature_K": result.temperature.tolist(),
        "current_A": result.current.tolist(),
        "target_A": result.target.tolist(),
        "currents_A": {name: current.tolist() for name, current in result.currents.items()},
        **figures_document(found),
        "budget": [
            {
                "place": row.place,
                "temperature_K": row.temperature,
                "total_ppm_per_K": 1e6 * row.total,
                "shares_ppm_per_K": {cause: 1e6 * share for cause, share in row.shares.items()},
            }
            for row in result.budget
        ],
        "supply_sensitivity": _listed(result.supply_sensitivity),
        "input_sensitivity": _listed(result.input_sensitivity),
        **devices_document(result),
        "warnings": list(result.warnings),
    }


def design_document(result: DesignResult) -> Document:
    """Return what `design` found, best first; the warnings are those for the first."""
    return {
        **study_heading(result.study),
        "designs": [
            figures_document(found)
            | {
                "plain_mirror": mirror
                and {
                    "input_current_A": mirror.input_current,
                    "feed_resistance_ohm": mirror.feed_resistance,
                }
            }
            | made_document(result, index, limit_document)
            for index, (found, mirror) in enumerate(
                zip(result.designs, result.plain_mirrors, strict=True)
            )
        ],
        "bound": {
            "deviation_ppm": 1e6 * result.bound.deviation,
            "proven": result.bound.proven,
        },
        "needed": {
            slot: {
                "resistance_ohm": point.resistance,
                "tc1_ppm_per_K": 1e6 * point.tc1,
                "tc2_ppm_per_K2": 1e6 * point.tc2,
            }
            for slot, point in result.needed.items()
        },
        **silicon_document(result, figures_document, limit_document),
        **front_document(result, figures_document, limit_document),
        "warnings": list(warnings_for(result.winner)),
        "examined": result.examined,
        "skipped": result.skipped,
    }


def menu_document(found: Menu) -> Document:
    """Return a process's materials; coefficients about the process's reference."""
    process = found.process
    return {
        "title": process.title,
        "range": _range(found.low, found.high, process.reference),
        "materials": [
            {
                "name": entry.material.name,
                "sheet_resistance_ohm": entry.material.sheet_resistance,
                "reference_K": entry.material.reference,
                "tc1_ppm_per_K": 1e6 * entry.tc1,
                "tc2_ppm_per_K2": 1e6 * entry.tc2,
                "spread": entry.material.spread,
                "matching_m": entry.material.matching,
                "min_width_m": entry.material.min_width,
                "valid_K": _listed(entry.material.valid),
                "source": entry.material.source,
                "role": entry.role,
                "left_ppm_per_K": 1e6 * entry.left,
                "drift": entry.drift and _drift(entry.drift),
            }
            for entry in found.entries
        ],
    }


def _listed(values: Sequence[float] | None) -> list[float] | None:
    return None if values is None else list(values)


def _range(low: float, high: float, reference: float) -> Document:
    return {"low_K": low, "high_K": high, "reference_K": reference}


def study_heading(study: Study) -> Document:
    """Return what every document of a study begins with."""
    over = study.range
    return {
        "title": study.title,
        "topology": study.circuit.topology,
        "range": _range(over.low, over.high, over.reference),
    }


def figures_document(found: Assessment) -> Document:
    """Return one design: its resistors, ratios and input, its drift, its verdict."""
    operation = found.operation
    return {
        "resistors": {slot: mix_document(mix) for slot, mix in operation.mixes.items()},
        **choices_document(operation),
        "drift": _drift_with_extremes(found.drift, "current_A"),
        "residual_drift": _drift_with_extremes(found.residual_drift, "ratio"),
        "limit": found.limit and limit_document(found.limit),
        "total_resistance_ohm": sum(mix.total_value for mix in operation.mixes.values()),
    }


def mix_document(mix: Mix) -> Document:
    """Return a mix: its join and its parts."""
    return {
        "join": mix.join,
        "parts": [
            {"material": p.material.name, "value_ohm": p.value, **part_sizes(p)} for p in mix.parts
        ],
    }


def choices_document(operation: Operation) -> Document:
    """Return the settled choices of a design; null where the circuit has none."""
    takes = operation.study.circuit.circuit.choices
    choices = operation.choices
    return {
        "area_ratio": choices.area_ratio if "area_ratio" in takes else None,
        "mirror_ratio": choices.mirror_ratio if "mirror_ratio" in takes else None,
        "input_current_A": choices.input_current,
    }


def _drift_with_extremes(drift: Drift, value: str) -> Document:
    return _drift(drift) | {
        "lowest": {"temperature_K": drift.lowest.temperature, value: drift.lowest.value},
        "highest": {"temperature_K": drift.highest.temperature, value: drift.highest.value},
    }


def _drift(drift: Drift) -> Document:
    return {
        "deviation_ppm": drift.deviation_ppm,
        "box_ppm_per_K": drift.box_ppm_per_K,
        "endpoint_ppm_per_K": drift.endpoint_ppm_per_K,
        "slope_ppm_per_K": drift.slope_ppm_per_K,
    }


def limit_document(limit: Verdict) -> Document:
    """Return a verdict; value and bound in the unit of the figure's name."""
    return {
        "met": limit.met,
        "figure": limit.figure,
        "value": limit.value,
        "bound": limit.bound,
    }
