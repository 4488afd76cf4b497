"""Runs independent tasks: in this process, in processes of this machine, or on a Dask cluster."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator
from concurrent.futures import CancelledError
from itertools import islice
from typing import Any, TypeVar

import joblib

from evenfire.errors import Problem, SweepError
from evenfire.sweep.journal import Journal

Task = TypeVar("Task")
Work = Callable[[Task], Any]
Watch = Callable[[int, int], None]
"""Called with the number of tasks done and of all different tasks."""

CLUSTER_WAIT_S = 10
"""How long a scheduler may take to answer [s]."""
MOST_WAITING = 1000
"""Tasks that the scheduler holds at once."""


def results(
    work: Work[Task],
    tasks: tuple[Task, ...],
    key_of: Callable[[Task], str],
    journal: Journal,
    *,
    processes: int,
    cluster: str | None = None,
    watch: Watch | None = None,
) -> tuple[Any, ...]:
    """The result of every task in the order of the tasks, whatever the order in which they finish.

    Parameters
    ----------
    work : callable
        Importable by other processes; its result is plain JSON.
    tasks : tuple
    key_of : callable
        What tells one task from every other.
    journal : Journal
        Every result goes there as it comes; what is there already is not computed again.
    processes : int
        On this machine; 1 works in this process.
    cluster : str, optional
        Address of a Dask scheduler to use instead.
    watch : callable, optional
    """
    keys = [key_of(task) for task in tasks]
    by_key = dict(zip(keys, tasks, strict=True))
    left = [(key, task) for key, task in by_key.items() if key not in journal]
    done = len(by_key) - len(left)
    if watch is not None:
        watch(done, len(by_key))
    for key, result in _computed(work, left, processes, cluster):
        journal.put(key, result)
        done += 1
        if watch is not None:
            watch(done, len(by_key))
    return tuple(journal.get(key) for key in keys)


def _computed(
    work: Work[Task], left: list[tuple[str, Task]], processes: int, cluster: str | None
) -> Iterable[tuple[str, Any]]:
    if cluster is not None:
        return _on_cluster(work, left, cluster)
    if processes == 1 or len(left) < 2:
        return ((key, work(task)) for key, task in left)
    parallel = joblib.Parallel(n_jobs=processes, return_as="generator_unordered")
    found: Iterable[tuple[str, Any]] = parallel(joblib.delayed(_keyed)(work, key, task) for key, task in left)
    return found


def _keyed(work: Work[Task], key: str, task: Task) -> tuple[str, Any]:
    return key, work(task)


def _on_cluster(work: Work[Task], left: list[tuple[str, Task]], address: str) -> Iterator[tuple[str, Any]]:
    """Tasks on the workers of a scheduler; those of a worker that dies are given to another."""
    try:
        from dask.distributed import Client, KilledWorker, as_completed
    except ImportError as error:
        raise _cluster_refusal(address, "needs Dask", "install evenfire[cluster]") from error
    try:
        client = Client(address, timeout=CLUSTER_WAIT_S)
    except (OSError, ValueError) as error:
        raise _cluster_refusal(
            address, f"no scheduler answers ({error})", "start dask-scheduler, or give its address"
        ) from error
    with client:
        waiting = iter(left)
        key_of = {}

        def submitted(count: int) -> list[Any]:
            """Further tasks, handed to the scheduler."""
            new = {
                client.submit(work, task, pure=False, retries=3): key for key, task in islice(waiting, count)
            }
            key_of.update(new)
            return list(new)

        running = as_completed(submitted(MOST_WAITING))
        for future in running:
            try:
                result = future.result()
            except (KilledWorker, CancelledError) as error:
                raise SweepError(
                    Problem(
                        code="S112",
                        where=f"--cluster {address}",
                        found=f"the cluster gave a task up ({type(error).__name__})",
                        allowed="give workers more memory and see their logs; the same command goes on from"
                        " what is done",
                    )
                ) from error
            yield key_of.pop(future), result
            for each in submitted(1):
                running.add(each)


def _cluster_refusal(address: str, found: str, allowed: str) -> SweepError:
    return SweepError(Problem(code="S106", where=f"--cluster {address}", found=found, allowed=allowed))
