"""How many parts pass, and how sure that is.

The interval is that of Clopper and Pearson, "The use of confidence or fiducial
limits illustrated in the case of the binomial", Biometrika 26 (1934). It holds for
independent parts; those of a scrambled Sobol sequence are spread more evenly than
that, so for them it is on the safe side.
"""

from __future__ import annotations

from dataclasses import dataclass

from scipy.special import betaincinv

__all__ = ["CONFIDENCE", "Yield", "clopper_pearson", "yield_of"]

CONFIDENCE = 0.95


@dataclass(frozen=True, slots=True)
class Yield:
    """Parts that pass.

    Attributes
    ----------
    passed, drawn : counts
    low, high : 95 % interval of the share in all parts that will ever be made [1]
    """

    passed: int
    drawn: int
    low: float
    high: float

    @property
    def share(self) -> float:
        """Passed over drawn [1]."""
        return self.passed / self.drawn


def clopper_pearson(passed: int, drawn: int, confidence: float = CONFIDENCE) -> tuple[float, float]:
    """Return the interval of a share: ``B(a/2; k, n - k + 1)`` to ``B(1 - a/2; k + 1, n - k)``.

    Parameters
    ----------
    passed, drawn : k of n
    confidence : 1 - a

    >>> [round(end, 4) for end in clopper_pearson(9, 10)]
    [0.555, 0.9975]
    """
    tail = (1 - confidence) / 2
    low = 0.0 if passed == 0 else float(betaincinv(passed, drawn - passed + 1, tail))
    high = 1.0 if passed == drawn else float(betaincinv(passed + 1, drawn - passed, 1 - tail))
    return low, high


def yield_of(passed: int, drawn: int) -> Yield:
    """Return a yield with its interval."""
    return Yield(passed, drawn, *clopper_pearson(passed, drawn))
