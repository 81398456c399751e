"""Does a run's folder come into being whole or not at all?"""

from __future__ import annotations

import json
from pathlib import Path

import pytest

from tests.report.sample import sample_exhibits, sample_result
from tuner.errors import TunerError
from tuner.report import run_files, write_run
from tuner.report.folder import check_free, free_folder, write_file, write_folder
from tuner.report.manifest import manifest
from tuner.report.structure_file import candidates_sdf

NAMES = ["candidates.csv", "candidates.sdf", "candidates.xlsx", "manifest.json", "report.html"]


def test_a_run_leaves_the_promised_files_and_nothing_else(tmp_path: Path) -> None:
    write_run(sample_result(), sample_exhibits(), tmp_path / "run", command="tuner design x")
    assert sorted(path.name for path in (tmp_path / "run").iterdir()) == NAMES
    assert [path.name for path in tmp_path.iterdir()] == ["run"]


def test_two_runs_leave_the_same_bytes() -> None:
    first, second = (run_files(sample_result(), sample_exhibits(), "x") for _ in range(2))
    assert first == second


def test_the_manifest_names_inputs_versions_counts_and_files() -> None:
    files = run_files(sample_result(), sample_exhibits(), "tuner design x")
    told = json.loads(files["manifest.json"])
    assert told["inputs"] == [{"name": "label.toml", "role": "brief", "sha256": "0" * 64}]
    assert told["counts"] == {"no route from the shelf": 600, "more than 6 steps": 12}
    assert (told["seed"], told["candidates"], told["timings_s"]) == (1, 4, {"search": 1.235})
    assert set(told["files"]) == set(NAMES) - {"manifest.json"}
    assert {"tuner", "library_data", "numpy", "rdkit"} <= set(told["versions"])


def test_no_path_of_the_machine_reaches_a_file() -> None:
    home = str(Path.home()).encode()
    here = str(Path.cwd()).encode()
    for name, content in run_files(sample_result(), sample_exhibits(), "x").items():
        assert here not in content, name
        assert home == b"/" or home not in content, name


def test_an_existing_folder_is_left_alone(tmp_path: Path) -> None:
    (tmp_path / "run").mkdir()
    (tmp_path / "run" / "mine.txt").write_text("keep me", encoding="utf-8")
    with pytest.raises(TunerError, match=r"run: this exists already; .*--again"):
        write_folder(tmp_path / "run", {"a": b"1"})
    with pytest.raises(TunerError, match="something else"):
        write_folder(tmp_path / "run", {"a": b"1"}, again=True)
    assert [path.name for path in (tmp_path / "run").iterdir()] == ["mine.txt"]


def test_an_earlier_run_is_replaced_whole(tmp_path: Path) -> None:
    write_folder(tmp_path / "run", {"manifest.json": b"{}", "old.txt": b"1"})
    write_folder(tmp_path / "run", {"manifest.json": b"{}", "new.txt": b"2"}, again=True)
    assert sorted(path.name for path in (tmp_path / "run").iterdir()) == ["manifest.json", "new.txt"]
    assert [path.name for path in tmp_path.iterdir()] == ["run"]


def test_a_run_that_breaks_off_leaves_nothing(tmp_path: Path) -> None:
    class Breaks(dict[str, bytes]):
        """Content whose second file cannot be had."""

        def items(self):  # type: ignore[no-untyped-def]
            yield "a", b"1"
            raise KeyboardInterrupt

    with pytest.raises(KeyboardInterrupt):
        write_folder(tmp_path / "run", Breaks())
    assert list(tmp_path.iterdir()) == []


def test_a_failed_replacement_keeps_the_earlier_run(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    write_folder(tmp_path / "run", {"manifest.json": b"{}"})
    rename = Path.rename

    def refuse(self: Path, target: Path) -> Path:
        if self.name.startswith(".run.") and "replaced" not in self.name:
            raise OSError(28, "No space left on device")
        return rename(self, target)

    monkeypatch.setattr(Path, "rename", refuse)
    with pytest.raises(TunerError, match="no space left"):
        write_folder(tmp_path / "run", {"manifest.json": b"2"}, again=True)
    assert (tmp_path / "run" / "manifest.json").read_bytes() == b"{}"
    assert [path.name for path in tmp_path.iterdir()] == ["run"]


def test_a_place_that_cannot_be_written_is_named(tmp_path: Path) -> None:
    (tmp_path / "file").write_text("x", encoding="utf-8")
    with pytest.raises(TunerError, match="cannot be written"):
        write_folder(tmp_path / "file" / "run", {"a": b"1"})


def test_a_place_that_cannot_be_written_is_named_before_the_search(tmp_path: Path) -> None:
    (tmp_path / "file").write_text("x", encoding="utf-8")
    with pytest.raises(TunerError, match="a file is in the way"):
        check_free(tmp_path / "file" / "run", again=False)
    check_free(tmp_path / "new" / "run", again=False)
    assert [path.name for path in tmp_path.iterdir()] == ["file"]


def test_a_file_is_replaced_whole(tmp_path: Path) -> None:
    path = tmp_path / "new" / "a.csv"
    write_file(path, b"1")
    write_file(path, b"2")
    assert path.read_bytes() == b"2"
    assert [p.name for p in path.parent.iterdir()] == ["a.csv"]


def test_a_new_run_gets_a_new_name(tmp_path: Path) -> None:
    assert free_folder(tmp_path, "run").name == "run"
    (tmp_path / "run").mkdir()
    assert free_folder(tmp_path, "run").name == "run-2"
    (tmp_path / "run-2").mkdir()
    assert free_folder(tmp_path, "run").name == "run-3"


def test_the_structure_file_has_a_record_per_drawn_candidate() -> None:
    records = candidates_sdf(sample_result(), sample_exhibits()).decode().split("$$$$\n")
    assert len(records) == 3 + 1, "three candidates have a block; the text ends with the last mark"
    lines = records[0].splitlines()
    assert lines[0] == "4-arylazophenol-0007"
    assert lines[lines.index("> <pka>") + 1 : lines.index("> <pka>") + 3] == ["6.43", ""]
    assert lines.count("M  END") == 1


def test_an_unknown_package_does_not_stop_the_manifest(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr("tuner.report.manifest.PACKAGES", ("no-such-package",))
    assert json.loads(manifest(sample_result(), {}, ""))["versions"]["no-such-package"] == "absent"
