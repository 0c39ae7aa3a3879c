"""Processes of our own for a batch, and any executor that the user has."""

from __future__ import annotations

import contextlib
import multiprocessing
import os
import signal
import threading
from collections.abc import Callable, Iterator, Sequence
from concurrent.futures import BrokenExecutor, Executor, ProcessPoolExecutor, as_completed
from dataclasses import replace
from multiprocessing.connection import wait

from rheo.batches.job import Job, run_job
from rheo.batches.row import Row
from rheo.errors import InputError

Done = Callable[[list[Row]], None]

# With a process on each core, threads inside the linear algebra would only be in each other's way.
_THREADS = (
    "OMP_NUM_THREADS",
    "OPENBLAS_NUM_THREADS",
    "MKL_NUM_THREADS",
    "VECLIB_MAXIMUM_THREADS",
)


def run_jobs(jobs: Sequence[Job], done: Done, executor: Executor | None, workers: int) -> None:
    """Run jobs and hand their rows to `done` as they come.

    Parameters
    ----------
    jobs : sequence of Job
        What to do.
    done : callable
        ``done(rows)``, called in this thread.
    executor : Executor or None
        Where to; processes of our own when absent.
    workers : int
        Number of these.

    Raises
    ------
    InputError
        If processes of our own end before they begin.
    """
    if executor is not None:
        for job in _run(jobs, done, executor):
            done(_lost(job))
        return
    if getattr(multiprocessing.current_process(), "_inheriting", False):
        # A process of ours that reads the user's script has come upon the call that began it.
        raise SystemExit(1)
    with _own_pool(min(workers, len(jobs))) as pool:
        left = _run(jobs, done, pool)
    if left and not _can_begin():
        raise InputError(
            "its processes end before they begin; in a script, call it below "
            "if __name__ == '__main__':",
            "batch",
        )
    # A process was ended from outside. What it had in hand is not known, so the rest is tried
    # file by file, each in a process that takes nothing else down.
    for job in left:
        for file in job.files:
            alone = replace(job, files=(file,))
            with _own_pool(1) as pool:
                lost = _run([alone], done, pool)
            if lost:
                done(_lost(alone))


def _can_begin() -> bool:
    """Return whether a new process gets so far as to work."""
    try:
        with _own_pool(1) as pool:
            return bool(pool.submit(bool, 1).result())
    except BrokenExecutor:
        return False


def _run(jobs: Sequence[Job], done: Done, executor: Executor) -> list[Job]:
    """Run jobs; return those that a broken executor left undone."""
    left: list[Job] = []
    futures = {}
    try:
        for job in jobs:
            futures[executor.submit(run_job, job)] = job
    except BrokenExecutor:
        left += jobs[len(futures) :]
    try:
        for future in as_completed(futures):
            error = future.exception()
            if isinstance(error, BrokenExecutor):
                left.append(futures[future])
            elif error is not None:
                reason = " ".join(f"{type(error).__name__}: {error}".split())[:200]
                done(_lost(futures[future], f"its process failed ({reason})"))
            else:
                done(future.result())
    except BaseException:
        for future in futures:
            future.cancel()
        raise
    return left


def _lost(job: Job, reason: str = "the process that worked on it was ended") -> list[Row]:
    return [Row(file, "", reason) for file in job.files]


@contextlib.contextmanager
def _own_pool(workers: int) -> Iterator[ProcessPoolExecutor]:
    """Return new processes, with one thread each for the linear algebra."""
    before = {name: os.environ.get(name) for name in _THREADS}
    os.environ.update(dict.fromkeys(_THREADS, "1"))
    try:
        context = multiprocessing.get_context("spawn")
        with ProcessPoolExecutor(workers, context, initializer=_prepare) as pool:
            try:
                yield pool
            except BaseException:
                pool.shutdown(wait=True, cancel_futures=True)
                raise
    finally:
        for name, value in before.items():
            if value is None:
                os.environ.pop(name, None)
            else:
                os.environ[name] = value


def _prepare() -> None:
    """Leave Ctrl-C to the parent, and end when the parent has ended."""
    signal.signal(signal.SIGINT, signal.SIG_IGN)
    parent = multiprocessing.parent_process()
    if parent is not None:
        threading.Thread(target=_follow, args=(parent.sentinel,), daemon=True).start()


def _follow(sentinel: int) -> None:
    wait([sentinel])
    os._exit(1)
