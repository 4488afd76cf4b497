"""Tasks run anywhere, in any order, with interruptions: the same results, nothing lost or done twice."""

from __future__ import annotations

import json
import math
import os
import signal
import socket
import subprocess
import sys
import time
from collections.abc import Callable
from pathlib import Path

import pytest

from evenfire.cli.sweep import run
from evenfire.errors import SweepError
from evenfire.report.sweep_document import sweep_document_text, sweep_table
from evenfire.sweep import engine
from evenfire.sweep.axis import axis
from evenfire.sweep.engine import results
from evenfire.sweep.journal import JOURNAL_FILE, Journal
from evenfire.sweep.run import SweepRequest, sweep
from tests.sweep.tiny_case import write_tiny_case

SCENARIOS = 200
ROOT = Path(__file__).parents[2]


def _as_text(number: int) -> str:
    return str(number)


def test_results_come_in_the_order_of_the_tasks_and_equal_tasks_are_done_once(tmp_path):
    """Six tasks of which two are equal: five computed, six results."""
    done = []

    def work(number: int) -> int:
        done.append(number)
        return number * number

    found = results(
        work, (3, 1, 2, 3, 5, 4), _as_text, Journal(tmp_path / "kept", "a"), processes=1, cluster=None
    )
    assert found == (9, 1, 4, 9, 25, 16)
    assert sorted(done) == [1, 2, 3, 4, 5]


def test_an_interrupted_run_goes_on_and_computes_nothing_twice(tmp_path):
    """Interrupted at the fifth of ten tasks; the second run does the missing ones alone."""
    done: list[int] = []

    def work(number: int) -> int:
        if number == 5 and len(done) == 5:
            raise KeyboardInterrupt
        done.append(number)
        return number * number

    tasks = tuple(range(10))
    with pytest.raises(KeyboardInterrupt):
        results(work, tasks, _as_text, Journal(tmp_path / "kept", "a"), processes=1)
    assert done == [0, 1, 2, 3, 4]
    done.append(-1)
    assert results(work, tasks, _as_text, Journal(tmp_path / "kept", "a"), processes=1) == tuple(
        n * n for n in tasks
    )
    assert sorted(done) == [-1, *tasks]


def test_a_line_cut_by_a_crash_is_dropped_and_computed_again(tmp_path):
    """The journal's last line is cut in the middle: that result alone is missing."""
    journal = Journal(tmp_path / "kept", "a")
    for number in range(3):
        journal.put(str(number), {"value": number})
    file = tmp_path / "kept" / JOURNAL_FILE
    file.write_bytes(file.read_bytes()[:-5])
    again = Journal(tmp_path / "kept", "a")
    assert [str(number) in again for number in range(3)] == [True, True, False]
    again.put("2", {"value": 2})
    assert Journal(tmp_path / "kept", "a").get("2") == {"value": 2}


def test_what_another_request_left_is_not_taken_for_ones_own(tmp_path):
    """Another fingerprint starts from nothing."""
    Journal(tmp_path / "kept", "fuel price").put("0", 1)
    assert "0" not in Journal(tmp_path / "kept", "carbon price")


def test_processes_give_the_results_of_one_process(tmp_path):
    """Twenty tasks in two processes."""
    tasks = tuple(range(20))
    one, two = (
        results(math.factorial, tasks, _as_text, Journal(tmp_path / f"kept{n}", "a"), processes=n)
        for n in (1, 2)
    )
    assert one == two


def test_a_cluster_that_does_not_answer_is_refused(tmp_path, monkeypatch):
    """S106 names the address and what to do."""
    monkeypatch.setattr(engine, "CLUSTER_WAIT_S", 1)
    with pytest.raises(SweepError, match=r"tcp://127\.0\.0\.1:9.*scheduler.*S106"):
        results(
            math.factorial,
            (1,),
            _as_text,
            Journal(tmp_path / "kept", "a"),
            processes=1,
            cluster="tcp://127.0.0.1:9",
        )


def test_a_task_that_kills_every_worker_is_told(tmp_path):
    """A task that ends the process it runs in, wherever it is tried: S112."""
    from dask.distributed import LocalCluster

    with (
        LocalCluster(
            n_workers=1, threads_per_worker=1, host="127.0.0.1", dashboard_address=None, silence_logs=50
        ) as cluster,
        pytest.raises(SweepError, match=r"gave a task up.*S112"),
    ):
        results(
            os._exit,
            (1,),
            _as_text,
            Journal(tmp_path / "kept", "a"),
            processes=1,
            cluster=cluster.scheduler_address,
        )


# --- sweeps ------------------------------------------------------------------------------------


@pytest.fixture(scope="module")
def tiny_case(tmp_path_factory: pytest.TempPathFactory) -> Path:
    return write_tiny_case(tmp_path_factory.mktemp("sweeps") / "tiny")


@pytest.fixture(scope="module")
def request_of_many(tiny_case: Path) -> SweepRequest:
    """A discount rate bends every cost, so that each of its values is a scenario by itself."""
    return SweepRequest(case=tiny_case, axes=(axis(f"money.discount_rate_percent=3:12.95:{SCENARIOS}"),))


@pytest.fixture(scope="module")
def single_machine(request_of_many: SweepRequest, tmp_path_factory: pytest.TempPathFactory) -> str:
    result, _ = sweep(request_of_many, tmp_path_factory.mktemp("single") / "kept")
    assert len(result.points) == SCENARIOS
    return sweep_document_text(result) + sweep_table(result)


def test_a_killed_worker_of_a_real_cluster_changes_no_byte(
    request_of_many, single_machine, tmp_path, monkeypatch
):
    """Scheduler and two workers on loopback; one is killed after a quarter of 200 scenarios.

    The scheduler holds 30 scenarios at once, so that most are handed over while others finish.
    """
    monkeypatch.setattr(engine, "MOST_WAITING", 30)
    with socket.socket() as free:
        free.bind(("127.0.0.1", 0))
        port = free.getsockname()[1]
    address = f"tcp://127.0.0.1:{port}"
    started = [_dask(tmp_path, "scheduler", "--host", "127.0.0.1", "--port", str(port), "--no-dashboard")]
    try:
        _wait_until(lambda: _answers(port))
        started += [
            _dask(tmp_path, "worker", address, "--nthreads", "1", "--no-nanny", "--no-dashboard")
            for _ in range(2)
        ]
        killed = []

        def watch(done: int, of: int) -> None:
            if done >= of // 4 and not killed:
                started[1].send_signal(signal.SIGKILL)
                killed.append(done)

        kept = tmp_path / "kept"
        result, forget = sweep(request_of_many, kept, cluster=address, watch=watch)
        keys = [json.loads(line).get("key") for line in (kept / JOURNAL_FILE).read_text().splitlines()[1:]]
        forget()
    finally:
        for process in reversed(started):
            process.kill()
            process.wait()
    assert killed
    assert len(keys) == len(set(keys)) == SCENARIOS
    assert not kept.exists()
    assert sweep_document_text(result) + sweep_table(result) == single_machine


def _dask(folder: Path, *arguments: str) -> subprocess.Popen[bytes]:
    with (folder / f"{arguments[0]}.log").open("ab") as log:
        return subprocess.Popen(
            [sys.executable, "-m", "dask", *arguments],
            cwd=folder,
            stdout=log,
            stderr=log,
            env=os.environ | {"PYTHONPATH": str(ROOT)},
        )


def _answers(port: int) -> bool:
    with socket.socket() as probe:
        probe.settimeout(0.2)
        return probe.connect_ex(("127.0.0.1", port)) == 0


def _wait_until(ready: Callable[[], bool], most_s: float = 60.0) -> None:
    end = time.monotonic() + most_s
    while not ready():
        assert time.monotonic() < end, "the scheduler did not start"
        time.sleep(0.1)


def test_processes_and_a_killed_run_change_no_byte(tiny_case, tmp_path):
    """`evenfire sweep` killed outright after some points, then repeated, and in two processes."""
    vary = "money.discount_rate_percent=4:12:12"

    def outcome(name: str, processes: int = 1) -> list[bytes]:
        run(
            tiny_case,
            (vary,),
            tmp_path / name,
            rank_percent=None,
            processes=processes,
            cluster=None,
            replace=False,
            quiet=True,
        )
        return [(tmp_path / name / f"sweep.{end}").read_bytes() for end in ("json", "csv", "html")]

    undisturbed = outcome("undisturbed")
    file = tmp_path / "killed.unfinished" / JOURNAL_FILE
    command = [sys.executable, "-m", "evenfire", "sweep", str(tiny_case), "--quiet"]
    running = subprocess.Popen([*command, "--vary", vary, "--out", str(tmp_path / "killed")])
    _wait_until(lambda: file.is_file() and len(file.read_text().splitlines()) > 3)
    running.kill()
    running.wait()
    assert not (tmp_path / "killed").exists()
    assert 3 < len(file.read_text().splitlines()) < 13
    assert outcome("killed") == undisturbed
    assert not file.exists()
    assert outcome("processes", processes=2) == undisturbed
