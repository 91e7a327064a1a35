"""Who does the blocks: this process, processes of this machine, or a Dask cluster.

All three are a standard `concurrent.futures.Executor`; a *crew* is one with
what one must know to use it.
"""

from __future__ import annotations

import multiprocessing
import os
import re
import signal
import sys
import warnings
from collections.abc import Callable
from concurrent.futures import BrokenExecutor, CancelledError, Executor, Future, ProcessPoolExecutor
from contextlib import AbstractContextManager, contextmanager
from dataclasses import dataclass
from functools import partial
from typing import TYPE_CHECKING, Any, TypeVar

from tcopt.errors import InputError
from tcopt.units import shown

if TYPE_CHECKING:
    from collections.abc import Iterator

__all__ = ["ANSWER_WITHIN", "Crew", "alone", "cluster", "crew_for", "processes"]

ANSWER_WITHIN = 5.0
"""Seconds within which a scheduler has to answer."""
_ADDRESS = re.compile(r"(tcp|tls|ws|wss)://[^\s/:]+:[0-9]{1,5}|tcp://\[[0-9a-fA-F:]+\]:[0-9]{1,5}")
_PER_PROCESSOR = 2
"""Worker processes per processor above which more cannot help."""

T = TypeVar("T")


@dataclass(frozen=True)
class Crew:
    """An executor to be opened, and reopened if it breaks.

    Attributes
    ----------
    opened : returns a context in which the executor works
    width : blocks worth handing out at a time
    lost : what a future raises when its worker died, so that the block can be tried again
    """

    opened: Callable[[], AbstractContextManager[Executor]]
    width: int
    lost: tuple[type[BaseException], ...] = ()


class _Here(Executor):
    """Does the work as it is handed in, in this very thread."""

    def submit(self, fn: Callable[..., T], /, *args: Any, **kwargs: Any) -> Future[T]:
        """Return a future that is done already."""
        done: Future[T] = Future()
        try:
            done.set_result(fn(*args, **kwargs))
        except Exception as error:
            done.set_exception(error)
        return done


def alone() -> Crew:
    """Return the crew of one: this process."""
    return Crew(_Here, 1)


def processes(workers: int) -> Crew:
    """Return worker processes on this machine.

    Raises
    ------
    InputError
        If there are fewer than one, or more than can help.
    """
    most = _PER_PROCESSOR * (os.cpu_count() or 1)
    if not 1 <= workers <= most:
        raise InputError(
            f"workers: found {workers}; accepted: a whole number from 1 to {most}, "
            f"{_PER_PROCESSOR} for each processor of this machine"
        )

    @contextmanager
    def opened() -> Iterator[Executor]:
        # A copy of this process starts at once, a fresh one has to import everything first.
        method = "fork" if sys.platform == "linux" else None
        context = multiprocessing.get_context(method)
        pool = ProcessPoolExecutor(workers, context, initializer=_leave_interrupts_to_the_parent)
        try:
            _copy_now(pool)
            yield pool
        finally:
            pool.shutdown(wait=True, cancel_futures=True)

    return Crew(opened, workers, (BrokenExecutor,))


def _copy_now(pool: ProcessPoolExecutor) -> None:
    """Make the pool's processes now, while no progress bar has a thread that a copy would lack.

    From Python 3.12 on a copy is warned of if there are any threads. Those of numpy's
    library for matrices know how to be copied, and the blocks multiply none.
    """
    with warnings.catch_warnings():
        warnings.filterwarnings("ignore", ".*multi-threaded.*fork", DeprecationWarning)
        pool.submit(int).result()


def _leave_interrupts_to_the_parent() -> None:
    """Let Ctrl-C, which reaches every process of the terminal, be answered by one of them."""
    signal.signal(signal.SIGINT, signal.SIG_IGN)


def cluster(address: str) -> Crew:
    """Return the workers of a Dask scheduler, which must have tcopt installed as well.

    Raises
    ------
    InputError
        If Dask is not installed, or no scheduler answers at the address.
    """
    unusable = InputError(
        f"scheduler: found none that answers within {ANSWER_WITHIN:g} s at {shown(address)}; "
        "accepted: the address of a running Dask scheduler, such as tcp://127.0.0.1:8786"
    )
    if not _ADDRESS.fullmatch(address):
        raise unusable
    try:
        from distributed import Client  # noqa: PLC0415  an optional extra
        from distributed.scheduler import KilledWorker  # noqa: PLC0415
    except ImportError:
        raise InputError(
            "scheduler: found no Dask on this machine; accepted: an installation with it, "
            "pip install 'tcopt[dask]'"
        ) from None
    connected = partial(Client, address, timeout=ANSWER_WITHIN, set_as_default=False)
    try:
        with connected() as client:
            width = max(1, sum(client.nthreads().values()))
    except OSError:
        raise unusable from None

    @contextmanager
    def opened() -> Iterator[Executor]:
        # Not pure: equal calls would share one result, and a lost block would stay lost.
        with connected() as client, client.get_executor(pure=False) as executor:
            yield executor

    return Crew(opened, width, (KilledWorker, CancelledError))


def crew_for(workers: int | None, scheduler: str | None) -> Crew:
    """Return the crew that a user asks for; alone where nothing is asked for.

    Raises
    ------
    InputError
        If both are asked for, or what is asked for cannot be had.
    """
    if scheduler is not None:
        if workers is not None:
            raise InputError(
                "workers: found it beside a scheduler, which has workers of its own; accepted: "
                "either workers or scheduler"
            )
        return cluster(scheduler)
    return alone() if workers in {None, 1} else processes(workers or 0)
