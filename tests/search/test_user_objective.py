"""A user's own function: loaded, called once per molecule, and set aside by name where it fails."""

from __future__ import annotations

from math import isnan

import pytest

from tuner.errors import BriefError
from tuner.search.user_objective import UserObjective, load_objective


def written(tmp_path, text):
    (tmp_path / "mine.py").write_text(text, encoding="utf-8")
    return tmp_path


def test_a_function_is_called_once_per_molecule(tmp_path):
    base = written(
        tmp_path, "calls = []\n\ndef length(smiles):\n    calls.append(smiles)\n    return len(smiles)\n"
    )
    objective = UserObjective(load_objective("mine.py:length", base))
    assert [objective("CCO"), objective("CCO"), objective("C")] == [3.0, 3.0, 1.0]
    assert objective.function.__globals__["calls"] == ["CCO", "C"]
    assert objective.note() == ""


def test_what_raises_or_gives_no_number_is_counted_and_named(tmp_path):
    text = (
        "def bad(smiles):\n"
        "    if smiles == 'C':\n"
        "        raise KeyError('no data')\n"
        "    return {'N': float('nan'), 'O': 'text', 'S': None}.get(smiles, 1.0)\n"
    )
    objective = UserObjective(load_objective("mine.py:bad", written(tmp_path, text)))
    assert [isnan(objective(s)) for s in ("C", "N", "O", "S", "P")] == [True, True, True, True, False]
    note = objective.note()
    assert note.startswith(
        "the user's own objective set aside 4 analogs: C (KeyError: 'no data'), N (gave nan)"
    )


@pytest.mark.parametrize(
    ("words", "text", "says"),
    [
        ("other.py:f", "", 'there is no file "other.py"; write file.py:function'),
        ("mine.py:g", "f = 1\n", 'has no function "g"'),
        ("mine.py:f", "f = 1\n", 'has no function "f"'),
        ("mine.py:f", "raise RuntimeError('x')\n", "fails while it is read (RuntimeError: x); mend the file"),
        ("nothing", "", "write file.py:function"),
    ],
)
def test_bad_names_are_one_clear_line(tmp_path, words, text, says):
    with pytest.raises(BriefError) as caught:
        load_objective(words, written(tmp_path, text))
    assert says in caught.value.text
    assert "key ranking.user_objective" in caught.value.text
    assert "\n" not in caught.value.text
