"""The shipped tables, and whether this machine is ready."""

from __future__ import annotations

import ctypes
import tempfile
from collections.abc import Callable
from importlib import metadata
from pathlib import Path

import pytest
import yaml

from calc import __file__ as package
from calc.cli import readiness
from calc.problems import StorageError
from calc.publish import places

Inside = Callable[..., tuple[int, str, str]]
DATA = Path(package).parent / "data"


def test_tables_are_named(inside: Inside) -> None:
    status, said, remarks = inside("tables")
    assert (status, remarks) == (0, "")
    assert [line.split()[0] for line in said.splitlines()] == ["fittings", "ends", "defaults"]


@pytest.mark.parametrize(("name", "forward"), [("fittings", "K"), ("ends", "entry")])
def test_a_table_says_every_value_with_source_and_place(inside: Inside, name: str, forward: str) -> None:
    status, said, _ = inside("tables", name)
    assert status == 0
    text = (DATA / "fittings.yaml").read_text(encoding="utf-8")
    rows = {line.split()[0]: line for line in said.splitlines()[3:]}
    table = yaml.safe_load(text)[name]
    assert list(rows) == list(table)
    for kind, entry in table.items():
        assert float(rows[kind].split()[1]) == entry[forward]
        assert entry["source"] in rows[kind]
        place, line, column = rows[kind].split()[-1].split(":")
        assert place == "calc/data/fittings.yaml"
        assert text.splitlines()[int(line) - 1][int(column) - 1 :].startswith(rows[kind].split()[1])


def test_defaults_are_said(inside: Inside) -> None:
    said = inside("tables", "defaults")[1]
    assert "site.gravity" in said
    assert "9.80665 m/s²" in said  # standard gravity, CGPM 1901


def test_this_machine_is_ready(inside: Inside) -> None:
    status, said, remarks = inside("ready")
    assert (status, remarks) == (0, "")
    assert said.splitlines()[-1].endswith("this machine is ready")
    assert f"   {metadata.version('weasyprint')}\n" in said
    assert "NO" not in said.split()


def test_what_is_lacking_is_named(inside: Inside, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def no_library(name: str) -> None:
        raise OSError(name)

    def no_fonts() -> Path:
        raise StorageError("the fonts are missing from this installation; install headtrace again")

    def version(name: str) -> str:
        if name == "pint":
            raise metadata.PackageNotFoundError(name)
        return {"numpy": "1.26.4", "weasyprint": "70.1"}.get(name, honest(name))

    honest = metadata.version
    monkeypatch.setattr(ctypes, "CDLL", no_library)
    monkeypatch.setattr(places, "fonts", no_fonts)
    monkeypatch.setattr(readiness.metadata, "version", version)
    monkeypatch.setattr(tempfile, "tempdir", str(tmp_path / "gone"))
    status, said, remarks = inside("ready")
    assert status == 5
    for what in ("Pango", "Fontconfig", "typefaces", "pint>=0.24", "numpy>=2.0", "weasyprint==70.0", "temporary files"):
        assert what in remarks
    assert "scipy" not in remarks
    assert "not installed" in said
    assert "NO    numpy>=2.0" in said
