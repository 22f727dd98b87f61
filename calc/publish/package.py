"""The package: its files made and proved, then written whole or not at all."""

from __future__ import annotations

import contextlib
import hashlib
import json
import os
import shutil
import tempfile
from collections.abc import Mapping
from pathlib import Path, PurePosixPath
from typing import Any

from calc.ledger import Ledger, exported
from calc.marks import Mark
from calc.problems import IntegrityError, Problem, ProblemsFound, StorageError
from calc.report.document import Document

FORMAT = "headtrace-manifest/1"
MANIFEST = "manifest.json"
INPUTS = "inputs"
REVISION = Mark("project.yaml", 1, 1)


def publish(
    document: Document, ledger: Ledger, inputs: Mapping[str, bytes], results: Mapping[str, Any]
) -> dict[str, bytes]:
    """Return the files of a package, every printed number proved against the ledger.

    Parameters
    ----------
    document : Document
        What is said.
    ledger : Ledger
        Holds every number that the document prints.
    inputs : mapping of str to bytes
        The input files as read, by name.
    results : mapping
        Results as plain data.

    Returns
    -------
    dict of str to bytes
        By path inside the package, in order.

    Raises
    ------
    Unresolved
        If a number has no line in the ledger.
    IntegrityError
        If a printed number does not prove, or a page cannot be set as written.
    """
    from calc.publish import pdf, screen
    from calc.publish.pictures import all_drawn
    from calc.publish.seal import seal_document

    for name in inputs:
        checked(name)
    pictures = all_drawn(document)
    books = exported(ledger)
    found = {"results.json": written_out(results), "ledger.json": written_out(books)}
    sheet = pdf.sheet_html(document, ledger, pictures)
    page = screen.page(document, ledger, pictures)
    if seal_document(sheet, document, ledger) != seal_document(page, document, ledger):
        raise IntegrityError("paper and screen do not print the same numbers")
    inside = {name: pdf.Embedded(content, "Source", "Input file as read") for name, content in inputs.items()}
    inside["results.json"] = pdf.Embedded(found["results.json"], "Data", "Results")
    inside["ledger.json"] = pdf.Embedded(found["ledger.json"], "Data", "Every number with its origin")
    for name, content in document.files.items():
        checked(name)
        found[name] = content
        inside.setdefault(name, pdf.Embedded(content, "Data", "Table cited on the pages"))
    found["package.pdf"] = pdf.write(document, sheet, pictures, inside)
    found["package.html"] = page.encode("utf-8")
    found |= {f"{INPUTS}/{name}": content for name, content in inputs.items()}
    found[MANIFEST] = manifest(found, document.digest)
    return dict(sorted(found.items()))


def written_out(told: Mapping[str, Any]) -> bytes:
    """Return plain data as JSON, with a final newline; a number that is not finite is refused."""
    return (json.dumps(told, ensure_ascii=False, allow_nan=False, indent=1) + "\n").encode("utf-8")


def manifest(files: Mapping[str, bytes], digest: str) -> bytes:
    """Return the manifest: the digest of each file, and the one printed on every page."""
    digests = {name: f"sha256:{hashlib.sha256(files[name]).hexdigest()}" for name in files if name != MANIFEST}
    told = {"format": FORMAT, "files": digests, "digest": digest}
    return (json.dumps(told, ensure_ascii=False, indent=1, sort_keys=True) + "\n").encode("utf-8")


def checked(name: str) -> PurePosixPath:
    """Return a path inside the package, unless it leads out of it.

    Raises
    ------
    IntegrityError
        If it does, or holds what no file system keeps apart.
    """
    path = PurePosixPath(name)
    odd = any(ord(character) < ord(" ") for character in name) or "\\" in name or ":" in name
    if odd or not path.parts or path.is_absolute() or ".." in path.parts or path.as_posix() != name:
        raise IntegrityError(f"'{name}' may not be the name of a file in a package")
    return path


def write_package(target: Path, files: Mapping[str, bytes], revision: Mark = REVISION) -> Path:
    """Write a package whole, or leave nothing.

    The files are written aside in the same folder, flushed to the disk, and put in place by one renaming.

    Parameters
    ----------
    target : Path
        The folder of the package; its parent is made if need be.
    files : mapping of str to bytes
        By path inside the package.
    revision : Mark
        Where the project states its revision, for the message.

    Returns
    -------
    Path
        The target. If it stands already with the same content it is left as it is.

    Raises
    ------
    ProblemsFound
        If it stands already with other content.
    StorageError
        If the disk or its permissions do not allow it.
    """
    paths = {checked(name): content for name, content in files.items()}
    try:
        if target.exists() or target.is_symlink():
            return _unchanged(target, files, revision)
        target.parent.mkdir(parents=True, exist_ok=True)
        aside = Path(tempfile.mkdtemp(prefix=f".{target.name}.partial-", dir=target.parent))
        try:
            _fill(aside, paths)
            _put(aside, target, files, revision)
        finally:
            shutil.rmtree(aside, ignore_errors=True)
        _flush(target.parent)
    except OSError as error:
        raise StorageError(f"{target}: {error.strerror or error}; nothing was written") from error
    return target


def _put(aside: Path, target: Path, files: Mapping[str, bytes], revision: Mark) -> None:
    """Put a package in place; another that came first is not overwritten."""
    aside.chmod(0o755)
    try:
        aside.rename(target)
    except OSError:
        if not target.is_dir():
            raise
        _unchanged(target, files, revision)


def _fill(folder: Path, paths: Mapping[PurePosixPath, bytes]) -> None:
    for path, content in paths.items():
        place = folder / path
        place.parent.mkdir(parents=True, exist_ok=True)
        with place.open("xb") as file:
            file.write(content)
            file.flush()
            os.fsync(file.fileno())
    for place in [*(p for p in folder.rglob("*") if p.is_dir()), folder]:
        _flush(place)


def _flush(folder: Path) -> None:
    """Flush a folder's own entries; where folders cannot be opened there is nothing to flush."""
    with contextlib.suppress(PermissionError, IsADirectoryError):
        handle = os.open(folder, os.O_RDONLY)
        try:
            os.fsync(handle)
        finally:
            os.close(handle)


def _unchanged(target: Path, files: Mapping[str, bytes], revision: Mark) -> Path:
    """Return a package that stands already, if it holds the same files; what was added since, a signature, may stay."""
    if target.is_symlink() or not target.is_dir():
        raise StorageError(f"{target}: something other than a package stands there; move it away")
    changed = [name for name, content in files.items() if _content(target / name) != content]
    if changed:
        found = f"{target.name} is issued already with other content ({', '.join(sorted(changed)[:3])})"
        hint = "raise the revision in project.yaml"
        raise ProblemsFound([Problem(revision, "issued-already", "project.revision", found, "a new revision", hint)])
    return target


def _content(place: Path) -> bytes | None:
    return place.read_bytes() if place.is_file() and not place.is_symlink() else None
