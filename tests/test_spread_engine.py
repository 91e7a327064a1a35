"""Whoever does the blocks, the result is the same; what is finished is kept."""

from __future__ import annotations

import os
import pickle
import sys
from collections.abc import Callable, Iterator
from concurrent.futures import Executor, Future
from concurrent.futures.process import BrokenProcessPool
from contextlib import contextmanager
from typing import Any

import numpy as np
import pytest

from tcopt.errors import InputError, NoSolutionError
from tcopt.spread import crews
from tcopt.spread.crews import Crew, alone, cluster, crew_for, processes
from tcopt.spread.engine import Sample, draw
from tcopt.spread.plan import Plan
from tcopt.spread.sample import BLOCK
from tests.spread_designs import insertion, material, plan_of, ptat_plus_vbe

SAMPLES = 3 * BLOCK + 100


@pytest.fixture(scope="module")
def plan() -> Plan:
    trim = (insertion(bits=6, measurement_error=1e-3),)
    film = material(tc1=-2e-4, spread=0.05, tc1_spread=1e-4)
    return plan_of(ptat_plus_vbe(film, trim=trim, samples=SAMPLES))


@pytest.fixture(scope="module")
def reference(plan: Plan) -> Sample:
    return draw(plan, alone())


def _same(first: Sample, second: Sample) -> None:
    np.testing.assert_array_equal(first.figures, second.figures)
    np.testing.assert_array_equal(first.current, second.current)
    np.testing.assert_array_equal(first.sums.count, second.sums.count)
    np.testing.assert_array_equal(first.sums.total, second.sums.total)
    for one, two in zip(first.settings, second.settings, strict=True):
        np.testing.assert_array_equal(one.scale, two.scale)
        np.testing.assert_array_equal(one.beyond, two.beyond)


def test_a_sample_is_whole(plan: Plan, reference: Sample) -> None:
    assert reference.drawn == reference.wanted == SAMPLES
    assert reference.stopped == ""
    assert np.isfinite(reference.figures).all()
    assert reference.sums.count.sum(axis=1) == pytest.approx(SAMPLES)
    assert reference.current.shape == (2, SAMPLES, 61)
    np.testing.assert_array_equal(reference.figures[:, :BLOCK], plan.block(0).figures)


@pytest.mark.parametrize("workers", [1, 2])
def test_worker_processes_give_the_same_to_the_last_bit(
    plan: Plan, reference: Sample, workers: int
) -> None:
    seen: list[tuple[int, int]] = []
    _same(draw(plan, processes(workers), lambda done, total: seen.append((done, total))), reference)
    assert seen[-1] == (SAMPLES, SAMPLES)
    assert len(seen) == 4


def test_a_cluster_gives_the_same_to_the_last_bit(plan: Plan, reference: Sample) -> None:
    distributed = pytest.importorskip("distributed")
    made = distributed.LocalCluster(
        n_workers=1, threads_per_worker=2, processes=False, protocol="tcp", dashboard_address=None
    )
    with made as local:
        _same(draw(plan, cluster(local.scheduler_address)), reference)


def test_a_plan_survives_pickling(plan: Plan) -> None:
    assert plan.operation.output(np.array([300.0])) > 0  # fills what is cached
    copy = pickle.loads(pickle.dumps(plan))
    np.testing.assert_array_equal(copy.block(3).figures, plan.block(3).figures)


class _Hands(Executor):
    """Does what it is given in reverse order, and can be made to fail at a call."""

    def __init__(self, fails: Callable[[int], BaseException | None] = lambda _: None) -> None:
        self.fails = fails
        self.calls = 0

    def submit(self, fn: Callable[..., Any], /, *args: Any, **kwargs: Any) -> Future[Any]:
        self.calls += 1
        done: Future[Any] = Future()
        error = self.fails(self.calls)
        if isinstance(error, KeyboardInterrupt):
            raise error
        if error is not None:
            done.set_exception(error)
        else:
            done.set_result(fn(*args, **kwargs))
        return done


def _crew(hands: Executor, width: int = 4) -> Crew:
    @contextmanager
    def opened() -> Iterator[Executor]:
        yield hands

    return Crew(opened, width, (BrokenProcessPool,))


def test_a_worker_that_dies_loses_no_finished_block(plan: Plan, reference: Sample) -> None:
    hands = _Hands(lambda call: BrokenProcessPool() if call in {2, 4} else None)
    _same(draw(plan, _crew(hands)), reference)
    assert hands.calls == 6  # four blocks, two of them twice


def test_workers_that_keep_dying_leave_what_is_finished(plan: Plan) -> None:
    hands = _Hands(lambda call: BrokenProcessPool() if call > 2 else None)
    found = draw(plan, _crew(hands))
    assert found.drawn == 2 * BLOCK
    assert found.stopped == "its workers kept dying"


def test_workers_that_never_finish_anything_are_an_error(plan: Plan) -> None:
    with pytest.raises(NoSolutionError, match="workers: found that they died 4 times without"):
        draw(plan, _crew(_Hands(lambda _: BrokenProcessPool())))


@pytest.mark.skipif(sys.platform != "linux", reason="a copied process knows the deadly block")
def test_a_real_process_that_dies_is_replaced(
    plan: Plan, reference: Sample, tmp_path: Any, monkeypatch: pytest.MonkeyPatch
) -> None:
    """The first process to take a block kills itself; the others' blocks and the rest are kept."""
    mark = tmp_path / "died"
    proper = Plan.block

    def deadly(self: Plan, number: int) -> Any:
        if number == 1 and not mark.exists():
            mark.touch()
            os._exit(1)
        return proper(self, number)

    monkeypatch.setattr(Plan, "block", deadly)
    _same(draw(plan, processes(2)), reference)
    assert mark.exists()


def test_an_interruption_keeps_what_is_finished(plan: Plan, reference: Sample) -> None:
    hands = _Hands(lambda call: KeyboardInterrupt() if call == 3 else None)
    found = draw(plan, _crew(hands, width=1))
    assert found.drawn == BLOCK * 2
    assert found.wanted == SAMPLES
    assert found.stopped == "it was interrupted"
    np.testing.assert_array_equal(found.figures, reference.figures[:, : 2 * BLOCK])
    assert found.current.shape == (2, 2 * BLOCK, 61)
    assert found.sums.count.sum(axis=1) == pytest.approx(2 * BLOCK)
    assert len(found.settings[0].scale) == 2 * BLOCK


def test_an_interruption_before_anything_is_finished_goes_on(plan: Plan) -> None:
    with pytest.raises(KeyboardInterrupt):
        draw(plan, _crew(_Hands(lambda _: KeyboardInterrupt())))


def test_an_error_in_the_work_is_not_swallowed(plan: Plan, monkeypatch: pytest.MonkeyPatch) -> None:
    def broken(*_: Any) -> Any:
        raise ZeroDivisionError("a defect")

    monkeypatch.setattr(Plan, "block", broken)
    with pytest.raises(ZeroDivisionError, match="a defect"):
        draw(plan, alone())


@pytest.mark.parametrize("workers", [-1, 0, 10_000])
def test_more_workers_than_sense_are_refused(workers: int) -> None:
    most = 2 * (os.cpu_count() or 1)
    message = f"workers: found {workers}; accepted: a whole number from 1 to {most}, 2 for each"
    with pytest.raises(InputError, match=message):
        crew_for(workers, None)


def test_workers_beside_a_scheduler_are_refused() -> None:
    with pytest.raises(InputError, match="workers: found it beside a scheduler, which has workers"):
        crew_for(2, "tcp://127.0.0.1:8786")


@pytest.mark.parametrize(
    "address",
    ["", "nonsense", "127.0.0.1:8786", "tcp://nowhere", "file:///etc/passwd", "tcp://a:b"],
)
def test_an_address_that_is_none_is_refused(address: str) -> None:
    message = "scheduler: found none that answers within 5 s at .*; accepted: the address of a run"
    with pytest.raises(InputError, match=message):
        crew_for(None, address)


def test_a_scheduler_that_does_not_answer_is_refused(monkeypatch: pytest.MonkeyPatch) -> None:
    pytest.importorskip("distributed")
    monkeypatch.setattr(crews, "ANSWER_WITHIN", 0.5)
    message = "scheduler: found none that answers within 0.5 s at 'tcp://127.0.0.1:9'; accepted"
    with pytest.raises(InputError, match=message):
        crew_for(None, "tcp://127.0.0.1:9")


def test_a_machine_without_dask_says_so(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setitem(sys.modules, "distributed", None)
    with pytest.raises(InputError, match=r"found no Dask on this machine; .* 'tcopt\[dask\]'"):
        crew_for(None, "tcp://127.0.0.1:8786")


@pytest.mark.parametrize("workers", [None, 1])
def test_one_worker_is_this_process(workers: int | None) -> None:
    assert crew_for(workers, None).opened is crews._Here
