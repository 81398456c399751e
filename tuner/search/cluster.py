"""How is one search shared by many machines, and what if one of them fails?

The same pieces of work (chunks of blocks, or batches of open prefixes) that threads share on one machine go
to the workers of a Dask cluster. Each piece carries the standing at the time it was sent, which only
decides how much it may pass over; what comes back is merged exactly. So the bytes of a result do not depend
on where it was computed. A piece whose worker is lost is sent again; if the whole cluster goes, the rest is
done here.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

from tuner.errors import SearchError
from tuner.search.certified import Batch, Tree
from tuner.search.exact import STAGE, Chunk, ChunkSearcher, Search, found
from tuner.search.found import Found
from tuner.search.result import Progress
from tuner.search.rows import Analogs
from tuner.search.standing import Standing

CONNECT_SECONDS = 10
ATTEMPTS = 3
PIECES_PER_WORKER = 3
"""Pieces sent ahead per thread of the cluster: enough to keep it busy, few enough to carry a fresh
standing.
"""

OPEN_BATCHES = 256
"""A tree is expanded here until so many batches are open; each is then one piece of work."""

Piece = Chunk | Batch


@dataclass(frozen=True)
class Outcome:
    """What one piece found: its share of front and best, and the analogs looked at."""

    front: Analogs
    best: Analogs
    visited: int


def work(search: Search, piece: Piece, front: Analogs, best: Analogs) -> Outcome:
    """Do one piece of work, knowing what the others had found when it was sent; runs on any machine."""
    standing = Standing(search.best_n, search.resolution)
    standing.offer(front)
    standing.offer(best)
    if isinstance(piece, Chunk):
        visited = ChunkSearcher(search).run(piece, standing)
    else:
        tree = Tree(search, standing, [piece])
        tree.run()
        visited = tree.visited
    return Outcome(standing.front, standing.best, visited)


def search_on_cluster(
    search: Search, scheduler: str, *, certified: bool = False, progress: Progress | None = None
) -> Found:
    """Like `search_exact` or `search_certified`, on the workers of a Dask cluster.

    Parameters
    ----------
    search : Search
    scheduler : str
        Address of the scheduler, such as "tcp://10.0.0.5:8786". The workers need this program installed.
    certified : bool
        Branch and bound instead of streaming.

    Raises
    ------
    SearchError
        The extra `cluster` is not installed, or no scheduler answers there.
    """
    client = _connect(scheduler)
    try:
        standing = search.seeded()
        pieces, visited = _pieces(search, standing, certified)
        visited += _Campaign(client, search, standing, progress).run(pieces)
        return found(search, standing, visited)
    finally:
        client.close()


def _pieces(search: Search, standing: Standing, certified: bool) -> tuple[list[Piece], int]:
    """The work to hand out, and the analogs already looked at."""
    if not certified:
        return list(search.chunks()), 0
    tree = Tree(search, standing)
    tree.run(enough=OPEN_BATCHES)
    return list(reversed(tree.open)), tree.visited


def _connect(scheduler: str) -> Any:
    """A client of the scheduler."""
    try:
        from distributed import Client
    except ImportError as fault:
        remedy = "install the optional extra 'cluster'"
        raise SearchError("a cluster cannot be used here", place="--scheduler", remedy=remedy) from fault
    try:
        client = Client(scheduler, timeout=CONNECT_SECONDS, set_as_default=False)
    except (OSError, ValueError, TypeError) as fault:
        remedy = "start it, or check the address (tcp://HOST:PORT)"
        what = f"no scheduler answers at {scheduler}"
        raise SearchError(what, place="--scheduler", remedy=remedy) from fault
    if not client.scheduler_info()["workers"]:
        client.close()
        what = f"the scheduler at {scheduler} has no workers"
        raise SearchError(what, place="--scheduler", remedy="start at least one worker")
    return client


class _Campaign:
    """Sends pieces, takes in what comes back, sends again what was lost."""

    def __init__(self, client: Any, search: Search, standing: Standing, progress: Progress | None) -> None:
        self.client = client
        self.search = search
        self.standing = standing
        self.progress = progress
        self.shared = client.scatter(search, broadcast=True, hash=False)
        self.visited = 0

    def run(self, pieces: Sequence[Piece]) -> int:
        """All pieces; returns the number of analogs looked at."""
        from distributed import as_completed

        waiting = [(piece, 0) for piece in reversed(pieces)]
        ahead = max(4, PIECES_PER_WORKER * sum(self.client.nthreads().values()))
        sent: dict[Any, tuple[Piece, int]] = {}
        arriving = as_completed([], loop=self.client.loop)
        done = 0
        while waiting or sent:
            while waiting and len(sent) < ahead:
                piece, attempt = waiting.pop()
                future = self._send(piece)
                sent[future] = (piece, attempt)
                arriving.add(future)
            future = next(arriving)
            piece, attempt = sent.pop(future)
            outcome = self._outcome(future, piece, attempt)
            if outcome is None:
                waiting.append((piece, attempt + 1))
                continue
            done += 1
            self.visited += outcome.visited
            self.standing.offer(outcome.front)
            self.standing.offer(outcome.best)
            if self.progress is not None:
                self.progress(STAGE, done, len(pieces))
        return self.visited

    def _send(self, piece: Piece) -> Any:
        standing = self.standing
        return self.client.submit(work, self.shared, piece, standing.front, standing.best, pure=False)

    def _outcome(self, future: Any, piece: Piece, attempt: int) -> Outcome | None:
        """What a piece found; None if it is to be sent again; done here if the cluster failed too often."""
        try:
            result: Outcome = future.result()
            return result
        except SearchError:
            raise
        except Exception:  # worker killed, connection lost, data gone with it
            if attempt + 1 >= ATTEMPTS:
                return work(self.search, piece, self.standing.front, self.standing.best)
            self.shared = self.client.scatter(self.search, broadcast=True, hash=False)
            return None
