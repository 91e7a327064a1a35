"""`design` for several outputs of one reference branch.

With every output at its target the base currents that load the input are known
from the targets, whatever the resistors. So each output's search over its own
slot stays what it is alone: exact. What the outputs share, the input current, is
chosen outside, by the output that is worst relative to its limit. With the best
input each output is searched once more, loaded by what the designs of the others
really take. Then everything is rounded and solved together, and those figures count.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.polynomial import Chebyshev
from scipy.optimize import minimize_scalar

from tcopt.assess import Assessment, assess, require_supply
from tcopt.cascade import Cascade, bases_at_target
from tcopt.check_cascade import named, overall_verdict, warnings_for_cascade
from tcopt.design import Bound, DesignResult
from tcopt.design_cascade import CascadeCandidate, CascadeDesign
from tcopt.devices import DeviceQuantity
from tcopt.errors import InputError, NoSolutionError
from tcopt.finish import finished_study
from tcopt.mix.search import SPARE, needed_point, open_slots, plain_mirror, rounded, search_groups
from tcopt.operation import Choices, Operation, fixed_mixes
from tcopt.study import CascadeStudy, OpenSlot, Span

__all__ = ["design_cascade", "finished_cascade"]

_INPUTS = 7
"""Input currents of the first grid where the input is free."""
_NEAR = 0.01
"""How closely a free input current is found, relative; its optimum is flat."""
_BRENT = 12
_ROUNDS = 5
_NONE = 1e9
"""Stands for a figure where there is no design."""
_DEGREE = 40
"""Of the polynomial for the load in a search; the full solution comes after it."""


def finished_cascade(study: CascadeStudy, candidate: CascadeCandidate) -> CascadeStudy:
    """Return the study of a complete design; checked, it gives the very figures of the design."""
    outputs = {name: finished_study(found.operation) for name, found in candidate.outputs.items()}
    return CascadeStudy(study.title, outputs)


def design_cascade(
    study: CascadeStudy, progress: Callable[[int, int], None] | None = None
) -> CascadeDesign:
    """Return the best designs of several outputs of one reference branch.

    Designs are ranked by the output whose figure is largest relative to its limit;
    outputs without a limit decide, by their deviation, between those that are equal so
    far. Among the designs of one output the deviation decides, as with a single output.

    Parameters
    ----------
    study : the question
    progress : called with searches done and searches in all

    Raises
    ------
    InputError
        If a resistor that all outputs share is open, or silicon or a layout is asked for.
    NoSolutionError
        If an output has no allowed design with any input.
    """
    for name, slot in study.shared.resistors.items():
        if name != "output" and isinstance(slot, OpenSlot):
            raise InputError(
                f"{study.path}: resistors.{name}: found an open resistor that all outputs share; "
                "accepted: parts, since only the outputs' own resistors are designed together"
            )
    if study.shared.search.purpose == "silicon" or study.shared.layout is not None:
        raise InputError(
            f"{study.path}: found several outputs with search.for = 'silicon' or a layout; "
            "accepted: a study of one output for those"
        )
    search = _Search(study, progress)
    candidates = sorted((_candidate(outputs) for outputs in search.by_input()), key=_rank)
    outputs, candidates[0] = search.finished(candidates[0])
    best = candidates[0].outputs
    return CascadeDesign(
        study=study,
        designs=tuple(candidates[: study.shared.search.show]),
        outputs=outputs,
        warnings=warnings_for_cascade(
            Cascade({name: _alone(found.operation) for name, found in best.items()})
        ),
        examined=search.examined,
        skipped=search.skipped,
    )


@dataclass(frozen=True)
class _Output:
    """Designs of one output with its load held, best first, and the bound."""

    designs: tuple[Assessment, ...]
    bound: Bound
    examined: int
    skipped: int


class _Search:
    """The searches of all outputs."""

    def __init__(self, study: CascadeStudy, progress: Callable[[int, int], None] | None) -> None:
        self.study = study
        self.examined = self.skipped = 0
        self._progress = progress
        self._done, self._total = 0, len(study.outputs)
        self._without: dict[str, str] = {}

    def by_input(self) -> list[dict[str, _Output]]:
        """Return the best design of every output for each input current that has one."""
        choice = self.study.shared.input_currents
        if isinstance(choice, Span):
            found = self._free(choice)
        else:
            values: Sequence[float | None] = (None,) if choice is None else choice
            self._total *= len(values) + 1
            found = [self._at_targets(value) for value in values]
        usable = [outputs for outputs in found if outputs is not None]
        if not usable:
            name, why = next(iter(self._without.items()))
            raise NoSolutionError(f"{self.study.path}: outputs.{name}: {why}")
        return usable

    def finished(
        self, candidate: CascadeCandidate
    ) -> tuple[dict[str, DesignResult], CascadeCandidate]:
        """Return the best designs of each output beside those of the others, and the best of all.

        Each is solved with the best of the others, which are chosen again until they stand
        still.
        """
        keep = self.study.shared.search.show
        ranked: dict[str, _Output] = {}
        for name, found in candidate.outputs.items():
            load = _smooth(found.operation)
            output = self._one(name, load, candidate.input_current, keep)
            if output is None:
                raise AssertionError("an input that had a design has none")
            ranked[name] = output
        chosen = {name: output.designs[0].operation for name, output in ranked.items()}
        for _ in range(_ROUNDS):
            lists = {name: _beside(name, chosen, output) for name, output in ranked.items()}
            best = {name: designs[0].operation for name, designs in lists.items()}
            if all(_alone(best[name]) == _alone(chosen[name]) for name in chosen):
                break
            chosen = best
        results: dict[str, DesignResult] = {}
        for name, designs in lists.items():
            # of two so equal that each is better once the other leads, the chosen one leads
            led = [d for d in designs if _alone(d.operation) == _alone(chosen[name])]
            others = [d for d in designs if _alone(d.operation) != _alone(chosen[name])]
            dropped = len(ranked[name].designs) - len(designs)
            self.skipped += dropped
            results[name] = _result([*led, *others][:keep], ranked[name], dropped)
        if self._progress is not None:
            self._progress(self._total, self._total)
        return results, _complete({name: result.winner for name, result in results.items()})

    def _free(self, span: Span) -> list[dict[str, _Output] | None]:
        """Return the designs for input currents of a span: a grid, and about the best of it."""
        digits = self.study.shared.search.digits
        self._total *= _INPUTS + _BRENT + 1
        tried: dict[float, dict[str, _Output] | None] = {}

        def worst(log_current: float) -> float:
            value = float(f"{np.exp(log_current):.{digits}g}")
            value = min(max(value, span.low), span.high)
            if value not in tried:
                tried[value] = self._at_targets(value)
            outputs = tried[value]
            return _NONE if outputs is None else _by_worst(outputs)

        grid = np.log(np.geomspace(span.low, span.high, _INPUTS))
        middle = int(np.argmin([worst(float(point)) for point in grid]))
        near = (grid[max(0, middle - 1)], grid[min(_INPUTS - 1, middle + 1)])
        options = {"xatol": _NEAR, "maxiter": _BRENT}
        minimize_scalar(worst, bounds=near, method="bounded", options=options)
        return list(tried.values())

    def _at_targets(self, current: float | None) -> dict[str, _Output] | None:
        """Return the best design of every output, the others at their targets; None without any.

        Where leakage counts, the base current at the target depends, a little, on the area
        ratio: that of the best design is taken, chosen again until it stands still.
        """
        singles = self.study.outputs
        areas = {name: min(single.circuit.area_ratio) for name, single in singles.items()}
        leaks = "leakage" in self.study.shared.circuit.effects
        known: dict[tuple[str, tuple[float, ...]], _Output] = {}
        for _ in range(_ROUNDS):
            everything = {
                name: Operation(single, Choices(areas[name], 1.0, current))
                for name, single in singles.items()
            }
            found: dict[str, _Output] = {}
            for name in singles:
                key = (name, tuple(area for other, area in areas.items() if other != name))
                if key not in known:
                    output = self._one(name, bases_at_target(everything, name), current, 1)
                    if output is None:
                        return None
                    known[key] = output
                found[name] = known[key]
            chosen = {n: o.designs[0].operation.choices.area_ratio for n, o in found.items()}
            if chosen == areas or not leaks:
                break
            areas = chosen
        return found

    def _one(
        self, name: str, load: DeviceQuantity | None, current: float | None, keep: int
    ) -> _Output | None:
        """Return the best designs of one output under this load; None without any."""
        if self._progress is not None:
            self._progress(min(self._done, self._total), self._total)
        self._done += 1
        study = self.study.outputs[name]
        shown = study.search.model_copy(update={"show": keep})
        question = study.model_copy(update={"search": shown})
        mixes = fixed_mixes(study)
        try:
            for area in study.circuit.area_ratio:
                require_supply(study, area)
            best, bound = search_groups(
                question,
                [
                    (Operation(question, Choices(area, 1.0, current), mixes, load), None)
                    for area in study.circuit.area_ratio
                ],
            )
        except NoSolutionError as error:
            self._without[name] = str(error)
            return None
        self.examined += best.examined
        skipped = best.skipped
        slots = tuple(open_slots(study))
        designs = []
        for fit in best.ranked()[: keep + SPARE]:
            try:
                designs.append(assess(replace(rounded(fit.operation, slots), study=study)))
            except NoSolutionError:
                skipped += 1
        self.skipped += skipped
        if not designs:
            self._without[name] = (
                "no allowed mix gives the target current over the whole range; accepted: ratios, "
                "inputs and materials for which the needed resistance is positive"
            )
            return None
        designs.sort(key=_deviation)
        return _Output(tuple(designs), bound, best.examined, skipped)


def _deviation(found: Assessment) -> float:
    return found.residual_drift.deviation_ppm


def _by_worst(outputs: Mapping[str, _Output]) -> float:
    found = {name: output.designs[0] for name, output in outputs.items()}
    verdict = overall_verdict({name: each.limit for name, each in found.items()})
    return max(map(_deviation, found.values())) if verdict is None else verdict.relative


def _rank(candidate: CascadeCandidate) -> tuple[float, float]:
    unlimited = [_deviation(f) for f in candidate.outputs.values() if f.limit is None]
    relative = 0.0 if candidate.limit is None else candidate.limit.relative
    return relative, max(unlimited, default=0.0)


def _alone(operation: Operation) -> Operation:
    return replace(operation, other_bases=None)


def _together(operations: Mapping[str, Operation]) -> dict[str, Operation]:
    return Cascade({name: _alone(each) for name, each in operations.items()}).together()


def _smooth(operation: Operation) -> DeviceQuantity | None:
    """Return the load of an output as a polynomial in temperature, which costs next to nothing."""
    load = operation.other_bases
    if load is None:
        return None
    over = operation.study.range
    value = Chebyshev.interpolate(load.value, _DEGREE, domain=[over.low, over.high])
    slope = value.deriv()
    return DeviceQuantity(value, lambda T: np.asarray(slope(T) / value(T)), load.cause)


def _candidate(outputs: Mapping[str, _Output]) -> CascadeCandidate:
    """Return the complete design of the best design of each output."""
    operations = {name: output.designs[0].operation for name, output in outputs.items()}
    found: dict[str, Assessment] = {}
    for name, each in _together(operations).items():
        with named(name):
            found[name] = assess(each)
    return _complete(found)


def _complete(found: Mapping[str, Assessment]) -> CascadeCandidate:
    current = next(iter(found.values())).operation.choices.input_current
    verdict = overall_verdict({name: each.limit for name, each in found.items()})
    return CascadeCandidate(current, found, verdict)


def _beside(name: str, chosen: Mapping[str, Operation], output: _Output) -> list[Assessment]:
    """Return the designs of one output, best first, each solved with those of the others.

    Without those that then have no solution.
    """
    if output.designs[0].operation.other_bases is None:
        return list(output.designs)
    found: list[Assessment] = []
    for each in output.designs:
        together = _together({**chosen, name: each.operation})
        try:
            found.append(assess(together[name]))
        except NoSolutionError:
            continue
    return sorted(found, key=_deviation)


def _result(designs: Sequence[Assessment], output: _Output, dropped: int) -> DesignResult:
    study = designs[0].operation.study
    return DesignResult(
        study=study,
        designs=tuple(designs),
        plain_mirrors=tuple(plain_mirror(found) for found in designs),
        bound=output.bound,
        needed={slot: needed_point(designs[0], slot) for slot in open_slots(study)},
        examined=output.examined,
        skipped=output.skipped + dropped,
    )
