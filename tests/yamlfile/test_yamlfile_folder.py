"""A folder of YAML files: every top-level key once, nothing read from elsewhere, no traceback."""

from __future__ import annotations

import os
from pathlib import Path

import pytest

from calc.problems import show
from calc.yamlfile import Scalar, Sources, read_folder, source


def write(folder: Path, **files: str) -> Path:
    for name, text in files.items():
        (folder / f"{name}.yaml").write_text(text, encoding="utf-8")
    return folder


def codes(sources: Sources) -> list[str]:
    return [problem.code for problem in sources.problems]


def test_all_yaml_files_are_read_in_order(tmp_path: Path) -> None:
    write(tmp_path, network="pipes: {a: b}\n", cases="cases: {}\n")
    (tmp_path / "notes.txt").write_text("pipes: 1")
    (tmp_path / ".hidden.yaml").write_text("pipes: 1")
    (tmp_path / "deeper").mkdir()
    write(tmp_path / "deeper", network="pipes: 1")
    sources = read_folder(tmp_path)
    assert sources.problems == []
    assert [file.name for file in sources.files] == ["cases.yaml", "network.yaml"]
    assert sources.files[1].content == b"pipes: {a: b}\n"
    assert list(sources.top) == ["cases", "pipes"]
    assert sources.top["pipes"].key.mark.place == "network.yaml:1"
    assert sources.texts == {"cases.yaml": "cases: {}\n", "network.yaml": "pipes: {a: b}\n"}


def test_a_top_level_key_stands_once_in_all_files(tmp_path: Path) -> None:
    sources = read_folder(write(tmp_path, a="friction: fixed\n", b="# two\nfriction: haaland\n"))
    (problem,) = sources.problems
    assert show(problem, sources.texts) == (
        "b.yaml:2:1: friction: the key 'friction' stands twice, first at a.yaml:1:1; "
        "expected each top-level key once\n"
        "  2 | friction: haaland\n"
        "    | ^^^^^^^^\n"
        "  hint: move both into one file, under one key"
    )
    value = sources.top["friction"].value
    assert isinstance(value, Scalar)
    assert value.text == "fixed"


def test_problems_of_all_files_come_together_and_sorted(tmp_path: Path) -> None:
    sources = read_folder(write(tmp_path, c="a: [1\n", b="a: &x 1\nb: *x\n", a="- 1\n"))
    assert sources.problems == sorted(sources.problems)
    assert [str(one.mark) for one in sources.problems] == [
        "a.yaml:1:1",
        "b.yaml:1:4",
        "b.yaml:2:4",
        "c.yaml:1:4",
    ]
    assert codes(sources) == ["not-a-mapping", "yaml-anchor", "yaml-alias", "yaml-syntax"]


def test_a_folder_with_nothing_to_read(tmp_path: Path) -> None:
    assert codes(read_folder(tmp_path)) == ["nothing-to-read"]
    (tmp_path / "network.yml").write_text("pipes: {}")
    (problem,) = read_folder(tmp_path).problems
    assert problem.hint == "rename 'network.yml' so that it ends in '.yaml'"
    write(tmp_path, network="# nothing yet\n")
    assert codes(read_folder(tmp_path)) == ["nothing-to-read"]


def test_a_folder_that_is_none(tmp_path: Path) -> None:
    assert codes(read_folder(tmp_path / "nowhere")) == ["no-folder"]
    write(tmp_path, network="pipes: {}")
    assert codes(read_folder(tmp_path / "network.yaml")) == ["not-a-folder"]
    assert codes(read_folder(tmp_path / "network.yaml" / "x")) == ["not-a-folder"]
    assert codes(read_folder(tmp_path / "nul\0")) == ["unreadable"]


def test_links_may_not_leave_the_folder(tmp_path: Path) -> None:
    folder, outside = tmp_path / "project", tmp_path / "secret.yaml"
    folder.mkdir()
    outside.write_text("pipes: {}\n")
    write(folder, network="junctions: {}\n")
    (folder / "a.yaml").symlink_to(outside)
    (folder / "b.yaml").symlink_to(folder / "b.yaml")
    (folder / "c.yaml").symlink_to(folder / "gone")
    (folder / "d.yaml").symlink_to("network.yaml")
    sources = read_folder(folder)
    assert codes(sources) == ["outside-folder", "unreadable", "no-file", "duplicate-key"]
    assert [file.name for file in sources.files] == ["d.yaml", "network.yaml"]
    assert all(one.expected for one in sources.problems)


def test_a_folder_reached_by_a_link_is_read(tmp_path: Path) -> None:
    (tmp_path / "real").mkdir()
    write(tmp_path / "real", network="pipes: {}\n")
    (tmp_path / "link").symlink_to("real")
    assert read_folder(tmp_path / "link").problems == []


def test_what_is_no_file_is_not_opened(tmp_path: Path) -> None:
    (tmp_path / "a.yaml").mkdir()
    os.mkfifo(tmp_path / "b.yaml")
    sources = read_folder(tmp_path)
    assert codes(sources) == ["unreadable", "unreadable"]
    assert sources.problems[0].found == "'a.yaml' cannot be read: it is not a file"


def test_a_file_name_that_cannot_be_printed(tmp_path: Path) -> None:
    (tmp_path / "a\n.yaml").write_text("pipes: {}")
    Path(os.fsdecode(os.fsencode(tmp_path) + b"/\xff.yaml")).write_text("pipes: {}")
    sources = read_folder(tmp_path)
    assert codes(sources) == ["unreadable", "unreadable"]
    assert all(show(one, sources.texts).encode() for one in sources.problems)


def test_a_large_file_is_refused_before_it_is_read(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(source, "LARGEST_FILE", 20)
    sources = read_folder(write(tmp_path, a="a: " + "x" * 17, b="b: " + "x" * 18))
    assert codes(sources) == ["too-large"]
    assert sources.problems[0].mark.file == "b.yaml"


def test_a_file_in_another_encoding_is_shown(tmp_path: Path) -> None:
    (tmp_path / "a.yaml").write_bytes(b"a: 1\nb: caf\xe9\n")
    sources = read_folder(tmp_path)
    assert [(str(one.mark), one.code) for one in sources.problems] == [("a.yaml:2:7", "not-utf-8")]
    assert sources.texts["a.yaml"] == "a: 1\nb: caf\N{REPLACEMENT CHARACTER}\n"
