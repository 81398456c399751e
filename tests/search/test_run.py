"""A whole run, small: the same result however it is computed, limits that bite, faults in one line."""

from __future__ import annotations

from dataclasses import replace

import pytest

from tuner.brief import read_brief
from tuner.errors import BriefError, SearchError
from tuner.search import design, survey

TEXT = """
title = "test"
cores = ["4-nitrophenol"]
[target]
ph = 6.4
tolerance = 0.25
[groups]
allow = ["F", "Cl", "Br", "Me", "Et", "OMe", "CO2H", "CN", "COMe", "NO2"]
[limits]
max_steps = 4
max_substituents = 2
[ranking]
rows = 12
"""


def brief(tmp_path, text=TEXT):
    path = tmp_path / "test.toml"
    path.write_text(text, encoding="utf-8")
    return read_brief(path)


@pytest.fixture(scope="module")
def result(tmp_path_factory):
    return design(brief(tmp_path_factory.mktemp("run")))


def changed(tmp_path, *pairs):
    text = TEXT
    for before, after in pairs:
        assert before in text
        text = text.replace(before, after)
    return brief(tmp_path, text)


def test_rows_are_complete_and_in_order(result):
    rows = result.candidates
    assert [c.rank for c in rows] == list(range(1, len(rows) + 1))
    assert [c.score for c in rows] == sorted((c.score for c in rows), reverse=True)
    assert len({c.analog for c in rows}) == len({c.smiles for c in rows}) == len(rows) == 12
    for c in rows:
        assert c.offset == pytest.approx(c.pka - 6.4)
        assert c.working_range_high - c.working_range_low == pytest.approx(2.0)
        assert 0.0 <= c.hit_probability <= 1.0
        assert 0.0 <= c.stability <= 1.0
        assert c.steps <= 4
        assert c.substitution.count(",") <= 1
        assert c.route is not None
        assert len(c.route.steps) == c.steps
    assert any(c.front for c in rows)
    assert sum(c.knee for c in rows) <= 1


def test_the_result_does_not_depend_on_workers_or_method(tmp_path, result):
    plain = brief(tmp_path)
    one = design(replace(plain, search=replace(plain.search, workers=1)))
    many = design(replace(plain, search=replace(plain.search, workers=3)))
    bounded = design(replace(plain, search=replace(plain.search, method="certified")))
    assert one.candidates == many.candidates == result.candidates == bounded.candidates
    assert one.front == many.front == bounded.front
    assert one.cloud == many.cloud
    assert one.certificate == many.certificate
    assert bounded.method == "certified"


def test_space_and_survey_agree(tmp_path, result):
    assert survey(brief(tmp_path)) == result.spaces
    assert result.spaces[0].analogs < result.spaces[0].patterns


def test_a_second_target_is_kept(tmp_path):
    text = TEXT + '[[also]]\nname = "cold"\nph = 6.5\ntolerance = 0.3\nmedium = { temperature_c = 5 }\n'
    rows = design(brief(tmp_path, text)).candidates
    for c in rows:
        (cold,) = c.other_targets
        assert abs(cold.pka - 6.5) <= 0.3
        assert cold.pka > c.pka  # phenols weaken in the cold
        assert c.hit_probability <= cold.probability + 1e-9


def test_a_diverse_list_holds_more_different_groups(tmp_path, result):
    diverse = design(changed(tmp_path, ("rows = 12", "rows = 12\ndiverse = true")))

    def groups(rows):
        return {part.split("-", 1)[1] for c in rows for part in c.substitution.split(", ") if "-" in part}

    assert len(groups(diverse.candidates)) >= len(groups(result.candidates))
    assert diverse.candidates[0] == result.candidates[0]


def test_a_limit_on_the_molecule_is_applied_and_counted(tmp_path, result):
    highest = max(c.clogp for c in result.candidates) - 0.1
    limited = design(changed(tmp_path, ("max_steps = 4", f"max_steps = 4\nmax_clogp = {highest:.3f}")))
    assert all(c.clogp <= highest for c in limited.candidates)
    assert len(limited.candidates) == 12
    assert any("logP" in what and n > 0 for what, n in limited.counts)


def test_a_user_objective_ranks_and_its_failures_are_named(tmp_path):
    (tmp_path / "mine.py").write_text(
        "def chlorine(smiles):\n    if 'Br' in smiles:\n        raise ValueError('no bromine')\n"
        "    return -float(smiles.count('Cl'))\n",
        encoding="utf-8",
    )
    own = 'rows = 12\nuser_objective = "mine.py:chlorine"\nuser_objective_costs = 0.3'
    found = design(changed(tmp_path, ("rows = 12", own)))
    assert found.method == "evolutionary"
    assert "Cl" in found.candidates[0].smiles
    assert not any("Br" in c.smiles for c in found.candidates)
    assert any("set aside" in note and "no bromine" in note for note in found.notes)


@pytest.mark.parametrize(
    ("before", "after", "says"),
    [
        ("max_steps = 4", "max_steps = 4\nmax_molar_mass_g_mol = 120", "molar mass above 120 g/mol removes"),
        ("max_steps = 4", "max_steps = 4\nmax_clogp = -6", "calculated logP outside the limits removes"),
        ("max_steps = 4", "max_steps = 4\nmax_pka_sd = 0.021", "standard error above 0.021 removes"),
    ],
)
def test_limits_that_exclude_everything_say_which(tmp_path, before, after, says):
    with pytest.raises(BriefError) as caught:
        design(changed(tmp_path, (before, after)))
    assert says in caught.value.text
    assert "\n" not in caught.value.text


def test_a_target_out_of_reach_says_what_can_be_reached(tmp_path):
    far = changed(tmp_path, ("ph = 6.4", "ph = 11"), ('"CO2H", "CN", "COMe", "NO2"', '"tBu"'))
    with pytest.raises(
        BriefError,
        match=r"the target 11 is out of reach: pKa' of these cores and groups lies between \d\.\d and 8",
    ):
        design(far)


def test_a_cluster_that_is_not_there(tmp_path, monkeypatch):
    pytest.importorskip("distributed")
    monkeypatch.setattr("tuner.search.cluster.CONNECT_SECONDS", 1)
    with pytest.raises(SearchError, match="no scheduler answers"):
        design(brief(tmp_path), scheduler="tcp://127.0.0.1:9")
