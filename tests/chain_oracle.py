"""Several outputs of one reference branch, whole, from Kirchhoff's laws in 40 digits.

Nothing of ``tcopt`` is used here. All junction currents and the voltage across the diode-connected
transistor are unknown at once, no output is solved before another. They are found in floats first;
the answer counts only where every equation holds to 1e-30.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass, replace
from types import SimpleNamespace
from typing import Any

import mpmath
from scipy.optimize import fsolve

__all__ = ["Chain", "Output", "log_slope", "mp", "solve"]

mp: Any = mpmath.MPContext()
mp.dps = 40

FLOATS: Any = SimpleNamespace(log=math.log, exp=math.exp, mpf=float)
BOLTZMANN = "1.380649e-23"  # exact, SI 2019 (CODATA 2018)
ELEMENTARY_CHARGE = "1.602176634e-19"  # exact, SI 2019 (CODATA 2018)
TOLERANCE = mp.mpf("1e-60")
"""Of the sum of squares: steps end when the equations hold to 1e-30."""
PROOF = mp.mpf("1e-30")


@dataclass(frozen=True)
class Output:
    """One output: area, the resistor in its emitter, voltage of its node, a rough current."""

    area: float
    value: float
    material: tuple[float, float]
    voltage: float
    about: float


@dataclass(frozen=True)
class Chain:
    """A reference branch with its outputs; data of parts are those at T_0, in SI.

    ``material``: TC1 and TC2 of the resistors in the input and from the supply. ``gain``:
    current gain and its power of temperature.
    """

    T_0: float
    outputs: tuple[Output, ...]
    I_S0: float
    junction: tuple[float, float]
    gain: tuple[float, float]
    early: float
    leakage: float
    material: tuple[float, float]
    R_input: float
    follower: bool
    I_given: float | None = None
    supply: float | None = None
    R_feed: float = 0.0


def _equations(m: Any, chain: Chain, temperature: Any) -> tuple[Callable[..., list[Any]], Any]:
    """Return what is off in each equation, given V_D and the logarithms, and the leakage [A]."""
    T, T_0 = m.mpf(temperature), m.mpf(chain.T_0)

    def resistance(value: float, material: tuple[float, float]) -> Any:
        d = T - T_0
        return m.mpf(value) * (1 + m.mpf(material[0]) * d + m.mpf(material[1]) * d * d)

    V_T, V_T0 = (m.mpf(BOLTZMANN) * t / m.mpf(ELEMENTARY_CHARGE) for t in (T, T_0))
    eta, V_G0 = map(m.mpf, chain.junction)
    I_S = m.mpf(chain.I_S0) * (T / T_0) ** eta * m.exp(V_G0 * (1 / V_T0 - 1 / V_T))
    beta = m.mpf(chain.gain[0]) * (T / T_0) ** m.mpf(chain.gain[1])
    I_L = m.mpf(chain.leakage) * m.mpf(2) ** ((T - T_0) / 10)
    V_A = m.mpf(chain.early)
    R_input, R_feed = (resistance(R, chain.material) for R in (chain.R_input, chain.R_feed))
    feet = [resistance(output.value, output.material) for output in chain.outputs]

    def off(V_D: Any, *logs: Any) -> list[Any]:
        first, *junctions = (m.exp(x) for x in logs)
        bases = (first + sum(junctions)) / beta
        V_BE = V_T * m.log(first / (I_S * (1 + V_D / V_A)))
        line = V_BE + first * (1 + 1 / beta) * R_input
        # a follower of unit area hands the bases on, and takes a part in 1 + beta of them
        above = V_T * m.log(bases * beta / (1 + beta) / I_S) if chain.follower else m.mpf(0)
        taken = first + I_L + (bases / (1 + beta) if chain.follower else bases)
        if chain.I_given is not None:
            found = [taken / m.mpf(chain.I_given) - 1]
        else:
            found = [m.mpf(chain.supply) - line - above - taken * R_feed]
        found.append(V_BE + above - V_D)
        for J, R, output in zip(junctions, feet, chain.outputs, strict=True):
            foot = J * (1 + 1 / beta) * R
            wide = m.mpf(output.area) * I_S * (1 + (m.mpf(output.voltage) - foot) / V_A)
            found.append((V_T * m.log(J / wide) + foot - line) / V_T)
        return found

    return off, I_L


def solve(chain: Chain, temperature: Any) -> list[Any]:
    """Return the output currents [A]."""
    rough = chain.I_given or (chain.supply - 0.65) / chain.R_feed
    start = [1.3 if chain.follower else 0.65, math.log(rough)]
    start += [math.log(output.about) for output in chain.outputs]
    in_floats, _ = _equations(FLOATS, chain, temperature)
    near = fsolve(lambda x: in_floats(*x), start, xtol=1e-13)
    off, I_L = _equations(mp, chain, temperature)
    root = mp.findroot(off, list(map(mp.mpf, near)), solver="mdnewton", tol=TOLERANCE, verify=False)
    if max(abs(x) for x in off(*root)) > PROOF:
        raise AssertionError("the chain's equations do not hold")
    areas = [mp.mpf(output.area) for output in chain.outputs]
    return [mp.exp(x) + area * I_L for x, area in zip(list(root)[2:], areas, strict=True)]


def log_slope(chain: Chain, temperature: float, by: str) -> list[Any]:
    """Return ``(dI/dT)/I`` [1/K], or ``d ln I/d ln q`` of the input or the supply, by differences.

    Central ones over a relative step of 1e-12, so that 20 digits are right.
    """
    step = mp.mpf("1e-12")
    if by == "T":
        ends = [solve(chain, mp.mpf(temperature) * (1 + s)) for s in (step, -step)]
        size = 2 * step * mp.mpf(temperature)
    else:
        value = mp.mpf(getattr(chain, by))
        ends = [solve(replace(chain, **{by: value * (1 + s)}), temperature) for s in (step, -step)]
        size = 2 * step
    return [mp.log(high / low) / size for high, low in zip(*ends, strict=True)]
