"""Results as CSV tables: a heading of name and unit, numbers to full precision."""

from __future__ import annotations

import csv
from collections.abc import Iterable, Sequence
from io import StringIO
from typing import TYPE_CHECKING

import numpy as np

from tcopt.show.words import mix_words

if TYPE_CHECKING:
    from tcopt.arrays import Array
    from tcopt.check import CheckResult
    from tcopt.design import DesignResult
    from tcopt.menu import Menu

__all__ = ["csv_table", "designs_csv", "front_csv", "menu_csv", "sweep_csv"]


def csv_table(heading: Sequence[str], rows: Iterable[Sequence[object]]) -> str:
    """Return rows under a heading; None is an empty cell."""
    text = StringIO()
    writer = csv.writer(text, lineterminator="\n")
    writer.writerow(heading)
    writer.writerows(rows)
    return text.getvalue()


def sweep_csv(result: CheckResult) -> str:
    """Return current, target, residual and the causes of drift against temperature."""
    T = result.temperature
    columns = {
        "temperature [K]": T,
        "temperature [degC]": (T - 273.15).round(9),
        "current [A]": result.current,
        "target [A]": result.target,
        "residual [ppm]": 1e6 * (result.current / result.target - 1),
    }
    columns |= {f"{name} [A]": current for name, current in result.currents.items()}
    causes = result.assessment.operation.causes(T)
    columns |= {f"{cause} [ppm/K]": 1e6 * share for cause, share in causes.items()}
    columns["all causes [ppm/K]"] = 1e6 * np.sum(list(causes.values()), axis=0)
    columns |= _device_columns(result)
    rows = zip(*(column.tolist() for column in columns.values()), strict=True)
    return csv_table(list(columns), rows)


def _device_columns(result: CheckResult) -> dict[str, Array]:
    """Return what the design has of inversion, output resistance, heat and headroom."""
    found, need = result.sweep, result.headroom
    columns = {f"inversion coefficient {k} [1]": values for k, values in found.inversion.items()}
    optional: dict[str, Array | None] = {
        "output resistance [ohm]": found.output_resistance,
        "supply sensitivity [1]": found.supply_sensitivity,
        "die temperature [K]": found.die_temperature,
        "power [W]": found.power,
        "lowest output voltage [V]": None if need is None else need.lowest_output,
        "lowest supply [V]": None if need is None else need.lowest_supply,
    }
    return columns | {name: values for name, values in optional.items() if values is not None}


def designs_csv(result: DesignResult) -> str:
    """Return the ranked designs, a row each; values in SI, figures in ppm of the residual."""
    heading = [
        "rank", "resistors", "area ratio", "mirror ratio", "input current [A]",
        "deviation [ppm]", "box [ppm/K]", "endpoint [ppm/K]", "slope [ppm/K]", "limit met",
        "total resistance [ohm]", "plain mirror input [A]", "plain mirror feed [ohm]",
    ]  # fmt: skip
    silicon, sizes = result.silicon, result.sizes
    if silicon is not None:
        share = f"{100 * silicon.quantile:.4g} %"
        heading += [f"box, {share} of parts [ppm/K]", "box, median [ppm/K]", "spread of value [1]"]
    if sizes:
        heading += ["area [m^2]", "segments", "mismatch [1]"]
    rows = []
    for rank, (found, mirror) in enumerate(
        zip(result.designs, result.plain_mirrors, strict=True), start=1
    ):
        operation, left = found.operation, found.residual_drift
        takes = operation.study.circuit.circuit.choices
        mixes = "; ".join(
            f"{slot}: {mix_words(mix, digits=result.study.search.digits)}"
            for slot, mix in operation.mixes.items()
        )
        rows.append(
            [
                rank,
                mixes,
                operation.choices.area_ratio if "area_ratio" in takes else None,
                operation.choices.mirror_ratio if "mirror_ratio" in takes else None,
                operation.choices.input_current,
                left.deviation_ppm,
                left.box_ppm_per_K,
                left.endpoint_ppm_per_K,
                left.slope_ppm_per_K,
                found.limit and ("yes" if found.limit.met else "no"),
                sum(mix.total_value for mix in operation.mixes.values()),
                mirror and mirror.input_current,
                mirror and mirror.feed_resistance,
            ]
        )
        if silicon is not None:
            figures = silicon.figures[rank - 1]
            rows[-1] += [figures.box_ppm_per_K, figures.median_box_ppm_per_K, figures.spread]
        if sizes:
            made = sizes[rank - 1]
            rows[-1] += [made.area, made.segments, made.mismatch]
    return csv_table(heading, rows)


def front_csv(result: DesignResult) -> str:
    """Return the front of drift against area, a row each, from the smallest up."""
    heading = ["area [m^2]", "deviation [ppm]", "box [ppm/K]"]
    if result.silicon is not None:
        heading.append(f"box, {100 * result.silicon.quantile:.4g} % of parts [ppm/K]")
    rows = []
    for point in result.front:
        left = point.found.residual_drift
        mixes = "; ".join(
            f"{slot}: {mix_words(mix, digits=result.study.search.digits)}"
            for slot, mix in point.found.operation.mixes.items()
        )
        over = [] if point.silicon is None else [point.silicon.box_ppm_per_K]
        rows.append([point.area, left.deviation_ppm, left.box_ppm_per_K, *over, mixes])
    return csv_table([*heading, "resistors"], rows)


def menu_csv(found: Menu) -> str:
    """Return the materials of a process; coefficients about the process's reference."""
    heading = [
        "material", "sheet resistance [ohm]", "TC1 [ppm/K]", "TC2 [ppm/K^2]", "spread [1]",
        "valid from [K]", "valid to [K]", "role for a PTAT voltage", "1/T - TC1 [ppm/K]",
        "box of V_T/R [ppm/K]", "source",
    ]  # fmt: skip
    rows = [
        [
            entry.material.name,
            entry.material.sheet_resistance,
            1e6 * entry.tc1,
            1e6 * entry.tc2,
            entry.material.spread,
            *(entry.material.valid or (None, None)),
            f"{entry.role} 1/T",
            1e6 * entry.left,
            entry.drift and entry.drift.box_ppm_per_K,
            entry.material.source,
        ]
        for entry in found.entries
    ]
    return csv_table(heading, rows)
