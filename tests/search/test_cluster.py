"""A search on a cluster gives the same result as on one machine, also when a worker is killed while it
runs.
"""

from __future__ import annotations

import os
import signal

import pytest

from tests.search.synthetic import large_tables
from tests.search.test_run import brief
from tuner.errors import SearchError
from tuner.search import design
from tuner.search.certified import search_certified
from tuner.search.cluster import search_on_cluster
from tuner.search.exact import Search, search_exact
from tuner.search.rows import FIELDS
from tuner.search.tables import PKA_UNIT, Goal

distributed = pytest.importorskip("distributed")

HUNDREDTH = round(0.01 / PKA_UNIT)


def bytes_of(found):
    return [getattr(rows, name).tobytes() for rows in (found.front, found.best) for name in FIELDS]


@pytest.fixture(scope="module")
def cluster():
    options = {"n_workers": 3, "threads_per_worker": 1, "dashboard_address": None}
    with distributed.LocalCluster(processes=True, silence_logs="CRITICAL", **options) as running:
        yield running


def test_same_bytes_on_one_thread_many_threads_and_a_cluster_that_loses_a_worker(cluster):
    search = Search((large_tables(4, 44),), Goal(7.5, 0.2, max_steps=5), 50, largest_block=2**12)
    alone = search_exact(search, workers=1)
    victims = [worker.pid for worker in cluster.workers.values() if worker.pid]
    killed = []

    def kill_once(stage, done, total):
        if done == 5 and not killed:
            os.kill(victims[0], signal.SIGKILL)
            killed.append(victims[0])

    shared = search_on_cluster(search, cluster.scheduler_address, progress=kill_once)
    assert killed == victims[:1]
    assert bytes_of(shared) == bytes_of(alone)
    assert bytes_of(search_exact(search, workers=3)) == bytes_of(alone)
    assert shared.certificate.text == alone.certificate.text


def test_branch_and_bound_gives_the_same_bytes_on_a_cluster(cluster):
    search = Search((large_tables(6, 40),), Goal(7.5, 0.2, max_steps=5), 50, HUNDREDTH)
    alone = search_certified(search, workers=2)
    shared = search_on_cluster(search, cluster.scheduler_address, certified=True)
    assert bytes_of(shared) == bytes_of(alone)


def test_a_cluster_that_is_not_there_is_named_in_one_line(monkeypatch):
    monkeypatch.setattr("tuner.search.cluster.CONNECT_SECONDS", 1)
    search = Search((large_tables(2, 5),), Goal(7.5, 0.2), 5)
    with pytest.raises(SearchError, match=r"no scheduler answers at tcp://127\.0\.0\.1:9.*check the address"):
        search_on_cluster(search, "tcp://127.0.0.1:9")


def test_a_whole_run_gives_the_same_rows_on_a_cluster(cluster, tmp_path):
    plain = brief(tmp_path)
    shared = design(plain, scheduler=cluster.scheduler_address)
    alone = design(plain)
    assert shared.candidates == alone.candidates
    assert (shared.front, shared.cloud, shared.certificate) == (alone.front, alone.cloud, alone.certificate)
