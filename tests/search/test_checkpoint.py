"""An interrupted search is taken up where it stopped and ends with the same bytes."""

from __future__ import annotations

import pytest

from tests.search.synthetic import large_tables
from tuner.errors import SearchError
from tuner.search.exact import Search, search_exact
from tuner.search.rows import FIELDS
from tuner.search.tables import Goal

SEARCH = Search((large_tables(4, 24),), Goal(7.5, 0.2, max_steps=5), 40, largest_block=600)


def bytes_of(found):
    return [getattr(rows, name).tobytes() for rows in (found.front, found.best) for name in FIELDS]


def interrupt_after(chunks):
    def report(stage, done, total):
        if done >= chunks:
            raise KeyboardInterrupt

    return report


def test_interrupt_and_resume(tmp_path):
    kept = tmp_path / "search.npz"
    with pytest.raises(KeyboardInterrupt):
        search_exact(SEARCH, workers=2, progress=interrupt_after(20), checkpoint=kept)
    assert kept.exists()
    seen = []
    resumed = search_exact(
        SEARCH, workers=2, checkpoint=kept, progress=lambda stage, done, total: seen.append((done, total))
    )
    assert min(seen)[0] > 20
    assert seen[-1][0] == seen[-1][1]
    assert not kept.exists()
    assert bytes_of(resumed) == bytes_of(search_exact(SEARCH, workers=1))


def test_a_kept_state_of_another_problem_is_not_used(tmp_path):
    kept = tmp_path / "search.npz"
    with pytest.raises(KeyboardInterrupt):
        search_exact(SEARCH, workers=1, progress=interrupt_after(20), checkpoint=kept)
    other = Search(SEARCH.spaces, Goal(8.0, 0.2, max_steps=5), 40, largest_block=600)
    assert bytes_of(search_exact(other, checkpoint=kept)) == bytes_of(search_exact(other))


def test_a_damaged_state_is_named(tmp_path):
    kept = tmp_path / "search.npz"
    kept.write_bytes(b"not a state")
    with pytest.raises(SearchError, match=r"search\.npz: .*damaged; delete it"):
        search_exact(SEARCH, checkpoint=kept)
