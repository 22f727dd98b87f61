"""The typefaces: ours by name, cut to the same bytes each time, with what the pages need in them."""

from __future__ import annotations

import hashlib
import subprocess
import sys
from io import BytesIO
from pathlib import Path
from types import ModuleType

import pytest
from fontTools.ttLib import TTFont

from calc.publish import places

FAMILIES = {"Ledger Text", "Ledger Small", "Ledger Display", "Ledger Mono"}


@pytest.fixture(scope="module")
def faces() -> dict[str, bytes]:
    return {path.name: path.read_bytes() for path in sorted(places.fonts().glob("*.ttf"))}


def test_the_installed_faces_are_those_of_the_recipe(cutting: ModuleType) -> None:
    assert cutting.current(places.fonts())


def test_a_face_altered_by_one_byte_is_not_current(
    cutting: ModuleType, faces: dict[str, bytes], tmp_path: Path
) -> None:
    for path in places.fonts().iterdir():
        (tmp_path / path.name).write_bytes(path.read_bytes())
    assert cutting.current(tmp_path)
    name = next(iter(faces))
    (tmp_path / name).write_bytes(faces[name][:-1] + bytes([faces[name][-1] ^ 1]))
    assert not cutting.current(tmp_path)


@pytest.mark.slow
@pytest.mark.parametrize("seed", ["1", "2"])
def test_another_process_and_day_cuts_the_same_bytes(
    repository: Path, cutting: ModuleType, monkeypatch: pytest.MonkeyPatch, seed: str
) -> None:
    cut = cutting.CUTS[-1]
    monkeypatch.setenv("PYTHONHASHSEED", seed)
    monkeypatch.setenv("SOURCE_DATE_EPOCH", seed)
    code = "import cutting, hashlib; print(hashlib.sha256(cutting.make(cutting.CUTS[-1])).hexdigest())"
    done = subprocess.run(
        [sys.executable, "-c", code], cwd=repository / ".build", capture_output=True, text=True, check=True
    )
    expected = hashlib.sha256((places.fonts() / cut.file).read_bytes()).hexdigest()
    assert done.stdout.strip() == expected


def test_faces_carry_our_names_and_the_licence(faces: dict[str, bytes]) -> None:
    families = set()
    for content in faces.values():
        names = TTFont(BytesIO(content))["name"]
        families.add(names.getDebugName(16))
        assert "Reserved Font Name" in names.getDebugName(0)
        assert "Open Font License" in names.getDebugName(13)
        # the licence reserves this word: no name by which a face is called may hold it
        assert not any("Source" in (names.getDebugName(number) or "") for number in (1, 2, 3, 4, 6, 16, 17, 25))
    assert families == FAMILIES
    for licence in ("OFL-serif.txt", "OFL-mono.txt"):
        assert "SIL OPEN FONT LICENSE Version 1.1" in (places.fonts() / licence).read_text(encoding="utf-8")


def test_faces_hold_the_signs_that_pages_print(faces: dict[str, bytes]) -> None:
    signs = set("0123456789 −×·≥≤√∆′°²³ενρπμΣλφ½–—…éüñß") | {"\u00a0", "\u2009"}
    for name, content in faces.items():
        if not name.startswith("LedgerMono"):
            assert {sign for sign in signs if ord(sign) not in TTFont(BytesIO(content)).getBestCmap()} == set(), name


def test_figures_of_a_face_are_of_one_width(faces: dict[str, bytes]) -> None:
    for name, content in faces.items():
        font = TTFont(BytesIO(content))
        cmap = font.getBestCmap()
        assert len({font["hmtx"][cmap[ord(figure)]][0] for figure in "0123456789"}) == 1, name
