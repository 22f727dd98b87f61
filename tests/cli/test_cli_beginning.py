"""New folders: clean, whole, or not there at all."""

from __future__ import annotations

import json
import os
import shutil
from collections.abc import Callable
from pathlib import Path

import pytest
from jsonschema import Draft202012Validator

from calc import pipeline
from calc.cli.beginning import EDITORS, SCHEMA
from calc.cli.samples import SHELVES, samples

Inside = Callable[..., tuple[int, str, str]]


SMALL = [name for name, folder in samples().items() if folder.parent == SHELVES[0]]


@pytest.mark.parametrize("name", list(samples()))
def test_a_folder_is_begun_from_every_sample_and_project(inside: Inside, tmp_path: Path, name: str) -> None:
    folder = tmp_path / "works"
    status, said, remarks = inside("new", folder, "--like", name)
    assert (status, remarks) == (0, "")
    assert str(folder) in said
    origin = {file.name: file.read_bytes() for file in samples()[name].iterdir() if file.suffix in {".yaml", ".csv"}}
    begun = {file.name: file.read_bytes() for file in folder.iterdir()}
    assert begun.keys() == {*origin, SCHEMA}
    for file, content in origin.items():
        assert begun[file] == (EDITORS.encode() if file.endswith(".yaml") else b"") + content
    Draft202012Validator.check_schema(json.loads(begun[SCHEMA]))
    assert inside("inspect", folder)[0] == 0
    assert inside("solve", folder)[0] <= 1


def test_the_schema_beside_the_inputs_is_none_of_them(inside: Inside, tmp_path: Path) -> None:
    inside("new", tmp_path / "works")
    before = pipeline.read(tmp_path / "works")
    assert SCHEMA not in {file.name for file in before.files}
    (tmp_path / "works" / SCHEMA).unlink()
    assert pipeline.read(tmp_path / "works").digest == before.digest


@pytest.mark.parametrize("name", SMALL)
def test_a_sample_is_clean(inside: Inside, tmp_path: Path, name: str) -> None:
    folder = tmp_path / "works"
    assert inside("new", folder, "--like", name)[0] == 0
    assert inside("inspect", folder) == (0, "no problems; 0 findings\n", "")
    status, said, remarks = inside("solve", folder)
    assert (status, remarks) == (0, "")
    assert "NOT MET" not in said
    assert "no solution" not in said


def test_there_are_samples_to_choose_from(inside: Inside, tmp_path: Path) -> None:
    assert {"two-reservoirs", "three-reservoirs", "ostrel-transfer-main"} <= set(samples())
    inside("new", tmp_path / "plain")
    inside("new", tmp_path / "named", "--like", "two-reservoirs")
    contents = [{p.name: p.read_bytes() for p in (tmp_path / name).iterdir()} for name in ("plain", "named")]
    assert contents[0] == contents[1]
    status, said, remarks = inside("new", tmp_path / "third", "--like", "three-reservoir")
    assert (status, said) == (2, "")
    assert "did you mean 'three-reservoirs'?" in remarks
    assert not (tmp_path / "third").exists()


def test_the_middle_branch_of_three_reservoirs_turns_round(inside: Inside, tmp_path: Path) -> None:
    inside("new", tmp_path / "works", "--like", "three-reservoirs")
    said = inside("solve", tmp_path / "works")[1]
    assert "ash-fork gives " in said
    assert "merrow-bank gives " in said


def test_an_empty_folder_is_filled_where_it_stands(
    inside: Inside, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    folder = tmp_path / "works"
    folder.mkdir()
    number = folder.stat().st_ino
    monkeypatch.chdir(folder)
    assert inside("new", ".")[0] == 0
    assert folder.stat().st_ino == number
    assert inside("inspect", ".")[0] == 0
    assert all(not path.name.startswith(".") for path in folder.iterdir())


def test_parents_are_made(inside: Inside, tmp_path: Path) -> None:
    assert inside("new", tmp_path / "a" / "b" / "c")[0] == 0
    assert (tmp_path / "a" / "b" / "c" / "network.yaml").is_file()
    assert (tmp_path / "a" / "b" / "c").stat().st_mode & 0o777 == (tmp_path / "a").stat().st_mode & 0o777


def test_what_is_there_is_left_alone(inside: Inside, tmp_path: Path) -> None:
    folder = tmp_path / "works"
    folder.mkdir()
    (folder / ".note").write_text("mine", encoding="utf-8")
    status, said, remarks = inside("new", folder)
    assert (status, said) == (2, "")
    assert "holds something already; expected a folder that is new or empty" in remarks
    assert [path.name for path in folder.iterdir()] == [".note"]
    (tmp_path / "file").write_text("mine", encoding="utf-8")
    (tmp_path / "dangling").symlink_to(tmp_path / "nowhere")
    for name in ("file", "dangling"):
        assert inside("new", tmp_path / name)[0] == 2
    assert not (tmp_path / "nowhere").exists()


@pytest.mark.parametrize("standing", [False, True])
@pytest.mark.parametrize("broken", ["fsync", "rename"])
def test_a_disk_that_fails_leaves_nothing(
    inside: Inside, tmp_path: Path, monkeypatch: pytest.MonkeyPatch, broken: str, *, standing: bool
) -> None:
    folder = tmp_path / "a" / "works"
    if standing:
        folder.mkdir(parents=True)
    calls = []

    def fail(*words: object) -> None:
        calls.append(words)
        if broken == "fsync" or len(calls) > 1 or not standing:
            raise OSError(28, "No space left on device", "works")
        os.replace(*words)  # type: ignore[arg-type] # noqa: PTH105 - rename is what is broken

    if broken == "fsync":
        monkeypatch.setattr(os, "fsync", fail)
    else:
        monkeypatch.setattr(Path, "rename", fail)
    status, said, remarks = inside("new", folder)
    assert (status, said) == (5, "")
    assert remarks == "headtrace new: works: No space left on device\n"
    assert calls
    assert list(tmp_path.rglob("*")) == ([tmp_path / "a", folder] if standing else [])


def test_samples_are_read_as_they_are_shipped() -> None:
    for name in SMALL:
        for file in samples()[name].iterdir():
            text = file.read_text(encoding="utf-8")
            assert text.endswith("\n"), name
            assert "\t" not in text, name


def test_a_sample_copied_elsewhere_needs_nothing_else(inside: Inside, tmp_path: Path) -> None:
    inside("new", tmp_path / "works")
    shutil.move(tmp_path / "works", tmp_path / "moved")
    assert inside("solve", tmp_path / "moved")[0] == 0
