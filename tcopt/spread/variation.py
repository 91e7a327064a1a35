"""From independent standard normal variates to a circuit's quantities, for many parts at once.

A *variate* is one independent cause: a step of the factory that entries share,
what is an entry's own, the mismatch of one resistor or of a pair, the supply.
A *figure* (the sheet resistance of a material, ``ln I_S``) moves with the
variates that it loads on.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike
from scipy.special import ndtr

from tcopt.arrays import Array
from tcopt.laws import generated
from tcopt.operation import Mix, Operation
from tcopt.solve import currents
from tcopt.symbols import resistance_name

__all__ = [
    "FROM_OUTSIDE", "LOT", "MISMATCH", "TEST", "Figure", "Scale", "Variate", "Variation",
]  # fmt: skip

LOT, MISMATCH, FROM_OUTSIDE, TEST = "lot to lot", "mismatch", "from outside", "error of the test"
"""Kinds of variates. Those of the last do not make the part, but lead its trim astray."""

Figure = tuple[str, ...]
"""What varies: ('sheet', material), ('tc1', material), ('matching', slot, index), ('threshold',)"""
Scale = tuple[str, str | None]
"""What a trim scales: a slot and the one material of it, or None for all of it."""

_FACTORS = {"V_CC": "supply", "V_ref": "reference voltage", "I_given": "input", "M": "mirror ratio"}
"""Quantities that are multiplied by one plus the deviation of a figure."""
_LOGARITHMS = {
    "N": ("pair", 1.0), "inverse_beta": ("gain", -1.0), "I_spec": ("specific current", 1.0),
}  # fmt: skip
"""Quantities whose logarithm moves with a figure, and which way."""
_SUMS = {"log_I_S": "saturation current", "V_TH": "threshold"}
"""Quantities to which a figure is added."""


@dataclass(frozen=True, slots=True)
class Variate:
    """One independent cause: its name in words, and its kind."""

    name: str
    kind: str


@dataclass(frozen=True)
class Variation:
    """A finished design and what varies in it.

    Attributes
    ----------
    operation : the design
    variates : the independent causes, in the order of the columns of an array of them
    loads : figure -> (column, weight) of each variate that it moves with; the weight
        is one standard deviation, in the figure's unit; of a tolerance its half width
    missing : what would vary, but for want of data does not, in words
    """

    operation: Operation
    variates: tuple[Variate, ...]
    loads: Mapping[Figure, tuple[tuple[int, float], ...]]
    missing: tuple[str, ...] = ()

    def deviation(self, figure: Figure, z: Array) -> Array:
        """Return how far a figure is off for variates of shape (parts, variates): (parts, 1).

        A sum term by term and not a product of matrices, whose order of summation,
        and so its last bit, may depend on how many threads it is spread over.
        """
        total = np.zeros((len(z), 1))
        for column, weight in self.loads.get(figure, ()):
            total += weight * z[:, column : column + 1]
        return total

    def quantities(
        self,
        z: Array,
        temperature: ArrayLike,
        scales: Mapping[Scale, ArrayLike] | None = None,
    ) -> dict[str, Array]:
        """Return the circuit's quantities for many parts, of (parts, temperatures) or alike.

        ``R = R_0 (1 + sheet)(1 + matching)(1 + tolerance) scale (1 + (TC1 + tc1) d + (TC2 + tc2)
        d^2)``,
        deviations in small letters; the logarithms of I_S, beta, I_spec and N, and V_TH, move
        by theirs; supply, input, reference and mirror ratio by a factor.

        Parameters
        ----------
        z : standard normal variates, shape (parts, variates)
        temperature : [K], shape (temperatures,) or (parts, temperatures)
        scales : what a trim makes of slots or of a material in a slot [1], shape (parts, 1)
        """
        T = np.asarray(temperature, dtype=float)
        found = dict(self.operation.quantities(T))
        for name, figure in _FACTORS.items():
            if name in found and (figure,) in self.loads:
                found[name] = found[name] * (1 + self.deviation((figure,), z))
        for name, (figure, sign) in _LOGARITHMS.items():
            if name in found and (figure,) in self.loads:
                found[name] = found[name] * np.exp(sign * self.deviation((figure,), z))
        for name, figure in _SUMS.items():
            if name in found and (figure,) in self.loads:
                found[name] = found[name] + self.deviation((figure,), z)
        if ("threshold of the pair",) in self.loads:
            offset = self.deviation(("threshold of the pair",), z)
            found["N"] = found["N"] * np.exp(offset * self._per_volt(T))
        for slot, mix in self.operation.mixes.items():
            found[resistance_name(slot)] = self._resistance(slot, mix, z, T, scales or {})
        return found

    def _within_tolerance(self, slot: str, index: int, z: Array) -> Array | float:
        """Return how far an ordered part is off, anywhere in its tolerance alike: (parts, 1)."""
        (column, tolerance), *_ = self.loads.get(("tolerance", slot, str(index)), ((0, 0.0),))
        if not tolerance:
            return 0.0
        return np.asarray(tolerance * (2 * ndtr(z[:, column : column + 1]) - 1))

    def _per_volt(self, T: Array) -> Array:
        """Return ``g_m/I`` of the output transistor of the design as stated [1/V].

        At die temperatures [K], in all regions of inversion (`tcopt.laws.mosfet`). So an offset
        between the thresholds of a pair, small against n V_T, moves the current as this ratio
        of widths does.
        """
        circuit = self.operation.circuit
        found = self.operation.quantities(T)
        output = currents(circuit, found)[circuit.currents[-1]]
        s = np.sqrt(output / (found["N"] * found["I_spec"]))
        return np.asarray(generated.transconductance_share(s) / (found["n"] * found["V_T"]))

    def _resistance(
        self, slot: str, mix: Mix, z: Array, T: Array, scales: Mapping[Scale, ArrayLike]
    ) -> Array:
        each = []
        for index, part in enumerate(mix.parts):
            material = part.material
            level = part.value * (1 + self.deviation(("sheet", material.name), z))
            level = level * (1 + self.deviation(("matching", slot, str(index)), z))
            level = level * (1 + self._within_tolerance(slot, index, z))
            for key in ((slot, None), (slot, material.name)):
                level = level * np.asarray(scales.get(key, 1.0), dtype=float)
            ratio = generated.resistance_ratio(
                T,
                material.reference,
                material.tc1 + self.deviation(("tc1", material.name), z),
                material.tc2 + self.deviation(("tc2", material.name), z),
            )
            each.append(level * ratio)
        if mix.join == "series":
            return np.asarray(sum(each))
        return np.asarray(1 / sum(1 / R for R in each))
