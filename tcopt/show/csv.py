"""Results as CSV tables: a heading of name and unit, numbers to full precision."""

from __future__ import annotations

import csv
from collections.abc import Iterable, Sequence
from io import StringIO
from typing import TYPE_CHECKING

import numpy as np

from tcopt.show.words import mix_words

if TYPE_CHECKING:
    from tcopt.check import CheckResult
    from tcopt.design import DesignResult
    from tcopt.menu import Menu

__all__ = ["csv_table", "designs_csv", "menu_csv", "sweep_csv"]


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
    rows = zip(*(column.tolist() for column in columns.values()), strict=True)
    return csv_table(list(columns), rows)


def designs_csv(result: DesignResult) -> str:
    """Return the ranked designs, a row each; values in SI, figures in ppm of the residual."""
    heading = [
        "rank", "resistors", "area ratio", "mirror ratio", "input current [A]",
        "deviation [ppm]", "box [ppm/K]", "endpoint [ppm/K]", "slope [ppm/K]", "limit met",
        "total resistance [ohm]", "plain mirror input [A]", "plain mirror feed [ohm]",
    ]  # fmt: skip
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
    return csv_table(heading, rows)


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
