"""A package is written whole or not at all, and never over another."""

from __future__ import annotations

import errno
import hashlib
import json
import os
import tempfile
from pathlib import Path

import pytest
import sample

from calc.problems import IntegrityError, ProblemsFound, StorageError, Unresolved
from calc.publish import package as module
from calc.publish.package import checked, manifest, publish, write_package

FILES = {"package.pdf": b"%PDF", "inputs/network.yaml": b"pipes:\n", "manifest.json": b"{}\n"}


def held(folder: Path) -> dict[str, bytes]:
    return {p.relative_to(folder).as_posix(): p.read_bytes() for p in folder.rglob("*") if p.is_file()}


def test_a_package_is_written_as_given(tmp_path: Path) -> None:
    target = tmp_path / "issued" / "N-1_P01_checking"
    assert write_package(target, FILES) == target
    assert held(target) == FILES
    assert [p.name for p in target.parent.iterdir()] == [target.name]


def test_the_same_package_again_changes_nothing(tmp_path: Path) -> None:
    target = write_package(tmp_path / "a", FILES)
    (target / "package-signed.pdf").write_bytes(b"signed")
    times = {p: p.stat().st_mtime_ns for p in target.rglob("*")}
    assert write_package(target, FILES) == target
    assert {p: p.stat().st_mtime_ns for p in target.rglob("*")} == times


@pytest.mark.parametrize("name", sorted(FILES))
def test_other_content_is_refused(tmp_path: Path, name: str) -> None:
    target = write_package(tmp_path / "a", FILES)
    with pytest.raises(ProblemsFound) as raised:
        write_package(target, {**FILES, name: b"other"})
    assert f"a is issued already with other content ({name})" in str(raised.value)
    assert "raise the revision in project.yaml" in str(raised.value)
    assert held(target) == FILES
    assert [p.name for p in tmp_path.iterdir()] == ["a"]


def test_something_else_in_its_place_is_left_alone(tmp_path: Path) -> None:
    (tmp_path / "a").write_text("mine", encoding="utf-8")
    with pytest.raises(StorageError, match="something other than a package"):
        write_package(tmp_path / "a", FILES)
    assert (tmp_path / "a").read_text(encoding="utf-8") == "mine"


@pytest.mark.parametrize("count", range(1, 7))
def test_a_disk_that_fills_leaves_nothing(tmp_path: Path, monkeypatch: pytest.MonkeyPatch, count: int) -> None:
    calls = 0
    real = os.fsync

    def flush(handle: int) -> None:
        nonlocal calls
        calls += 1
        if calls == count:
            raise OSError(errno.ENOSPC, "No space left on device")
        real(handle)

    monkeypatch.setattr(os, "fsync", flush)
    with pytest.raises(StorageError, match="No space left on device"):
        write_package(tmp_path / "a", FILES)
    # the last flush, of the parent, comes after the package is in place and whole
    assert [p.name for p in tmp_path.iterdir()] == ([] if count < 6 else ["a"])


def test_an_interruption_leaves_nothing(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def stop(_: Path, __: Path) -> None:
        raise KeyboardInterrupt

    monkeypatch.setattr(Path, "rename", stop)
    with pytest.raises(KeyboardInterrupt):
        write_package(tmp_path / "a", FILES)
    assert list(tmp_path.iterdir()) == []


def test_no_permission_is_a_storage_error(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def refuse(*_: object, **__: object) -> str:
        raise PermissionError(errno.EACCES, "Permission denied")

    monkeypatch.setattr(tempfile, "mkdtemp", refuse)
    with pytest.raises(StorageError, match="Permission denied"):
        write_package(tmp_path / "a", FILES)


def test_another_that_came_first_is_kept(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    target = tmp_path / "a"
    fill = module._fill

    def slow(folder: Path, paths: dict[object, bytes]) -> None:
        fill(folder, paths)  # type: ignore[arg-type]
        target.mkdir()
        (target / "package.pdf").write_bytes(b"first")

    monkeypatch.setattr(module, "_fill", slow)
    with pytest.raises(ProblemsFound, match=r"issued already"):
        write_package(target, FILES)
    assert held(target) == {"package.pdf": b"first"}
    assert [p.name for p in tmp_path.iterdir()] == ["a"]


@pytest.mark.parametrize(
    "name", ["../x", "/x", "a/../../x", "a//b", "./a", "", "a\\b", "C:x", "a\nb", "a/", "..", "a\x00b"]
)
def test_names_that_lead_out_are_refused(tmp_path: Path, name: str) -> None:
    with pytest.raises(IntegrityError, match="may not be the name"):
        write_package(tmp_path / "a", {name: b""})
    assert list(tmp_path.iterdir()) == []


def test_names_within_are_taken() -> None:
    assert checked("inputs/pipes.csv").parts == ("inputs", "pipes.csv")


def test_the_manifest_gives_the_digest_of_each_file() -> None:
    told = json.loads(manifest(FILES, "sha256:ab"))
    assert told["format"] == "headtrace-manifest/1"
    assert told["digest"] == "sha256:ab"
    assert told["files"] == {
        name: "sha256:" + hashlib.sha256(FILES[name]).hexdigest() for name in ("inputs/network.yaml", "package.pdf")
    }
    # SHA-256 of "abc": FIPS 180-4, example (from memory)
    one = json.loads(manifest({"a": b"abc"}, ""))["files"]["a"]
    assert one == "sha256:ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad"
    assert manifest(FILES, "").endswith(b"}\n")


def test_a_package_has_its_files(package: dict[str, bytes]) -> None:
    assert list(package) == [
        *("inputs/cases.yaml", "inputs/network.yaml", "ledger.json", "manifest.json"),
        *("package.html", "package.pdf", "results.json"),
    ]
    told = json.loads(package["manifest.json"])
    for name, digest in told["files"].items():
        assert digest == "sha256:" + hashlib.sha256(package[name]).hexdigest()
    assert set(told["files"]) == package.keys() - {"manifest.json"}
    assert told["digest"] == "sha256:6b5c6bf793c5aa10ff"
    assert json.loads(package["ledger.json"])["format"] == "headtrace-ledger/1"
    assert package["inputs/network.yaml"] == sample.FILES["network.yaml"]
    assert len(package["package.html"]) < 3_000_000


def test_a_number_altered_in_the_ledger_stops_the_package() -> None:
    ledger = sample.ledger()
    document = sample.document("A4", ledger)
    spot = ledger.spot("pipes.sedge-link.velocity@base")
    changed = spot.column.values.copy()
    changed[spot.row] *= 1.01
    object.__setattr__(spot.column, "values", changed)
    with pytest.raises(
        IntegrityError, match=r"pipes.sedge-link.velocity@base: '−0.29' is printed, the ledger says '−0.30'"
    ):
        publish(document, ledger, {}, {})


def test_results_that_are_not_finite_are_refused() -> None:
    ledger = sample.ledger()
    with pytest.raises((ValueError, Unresolved)):
        publish(sample.document("A4", ledger), ledger, {}, {"flow": float("nan")})
