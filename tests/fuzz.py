"""Random circuits through the solver: each converges, or has a reason why it has no solution."""

from __future__ import annotations

import numpy as np
import pytest

from tcopt.reasons import reason
from tcopt.solve import currents, numerics
from tests import device_oracle as oracle
from tests.device_residuals import left
from tests.device_samples import DEVICE_CASES, drawn, row

__all__ = ["fuzz"]

PROMISED = 1e-9
"""What may be left of the input's current, relative."""
RESIDUAL = 1e-8
"""What may be left of a loop of voltages, in thermal voltages."""


def fuzz(each: int, seed: int, most_proved: int) -> tuple[int, list[str]]:
    """Return how many circuits converged, and the reasons of the others.

    Solutions are checked by the loops, explicitly; up to ``most_proved`` of the others, of
    all topologies, by the oracle.
    """
    converged, reasons = 0, []
    for topology, feed, device in DEVICE_CASES:
        circuit = numerics(topology, feed, device)
        q = drawn(topology, device, each, seed)
        found = currents(circuit, {name: q[name] for name in circuit.quantities})
        solved_ones = np.all([np.isfinite(v) & (v > 0) for v in found.values()], axis=0)
        to_prove = most_proved // len(DEVICE_CASES)
        for k in range(each):
            quantities = row(q, circuit.quantities, k)
            if solved_ones[k]:
                converged += 1
                over = left(
                    topology, feed, device, quantities, {n: float(v[k]) for n, v in found.items()}
                )
                assert all(value > 0 for value in over.positive), quantities
                assert max(map(abs, over.volts)) <= RESIDUAL * quantities["V_T"], quantities
                assert abs(over.amperes) <= PROMISED, quantities
                continue
            reasons.append(reason(circuit, quantities))
            if to_prove > 0:
                to_prove -= 1
                with pytest.raises(oracle.NoSolutionFoundError):
                    oracle.solve(topology, feed, device, quantities)
    return converged, reasons
