"""What a package prints does not hang on names or on the order of the files; and little input is enough."""

from __future__ import annotations

import re
from collections import Counter
from pathlib import Path

import yaml
from accounts import accounted
from pages import parts_within, plain, section, table, tables, texts_of
from works import DEMO, LOOP, TEXTS, work

from calc import pipeline
from calc.account import Account
from calc.report.document import Document, Heading, Number

RESULTS = ("pipes-", "losses-", "fittings-", "junctions-", "opinions-", "flows", "verdicts-", "criteria")


def composed(folder: Path, text: str, **files: str) -> tuple[Account, Document]:
    account = accounted(folder, text, **files)
    return account, pipeline.document(account, "checking")


def results(account: Account, document: Document) -> Counter[tuple[str, str, str]]:
    """Count the printed texts of results, by table and quantity."""
    found: Counter[tuple[str, str, str]] = Counter()
    for held in (held for key in RESULTS for held in tables(document, key)):
        for row in held.rows:
            for number in (part for cell in row.cells for part in parts_within(cell) if isinstance(part, Number)):
                found[held.key, account.ledger.spot(number.ref).column.name, number.text] += 1
    assert sum(found.values()) > 50
    return found


def test_renaming_changes_no_printed_result(tmp_path: Path) -> None:
    names = ("north", "south", "ash", "beech")
    renamed = LOOP
    for k, name in enumerate(names):
        renamed = re.sub(rf"\b{name}\b(?!-)", f"place-{chr(122 - k)}", renamed)
    renamed = renamed.replace("pipes.ash-beech-old.open", "pipes.old-link.open").replace("ash-beech-old:", "old-link:")
    assert renamed != LOOP
    held = composed(tmp_path, renamed)
    assert results(*held) == results(work("loop").account, work("loop").document)


def test_reordering_changes_no_printed_result(tmp_path: Path) -> None:
    told = yaml.safe_load(LOOP)
    turned = {key: told[key] for key in reversed(told)}
    for group in ("reservoirs", "junctions", "pipes"):
        turned[group] = {key: turned[group][key] for key in reversed(turned[group])}
    held = composed(tmp_path, yaml.safe_dump(turned, sort_keys=False, allow_unicode=True))
    assert results(*held) == results(work("loop").account, work("loop").document)
    for key in ("junctions-base", "junctions-shut", "junctions-warm", "flows"):
        first = {tuple(plain(cell) for cell in row.cells) for row in table(work("loop").document, key).rows}
        assert {tuple(plain(cell) for cell in row.cells) for row in table(held[1], key).rows} == first


def test_turning_a_pipe_round_changes_signs_alone(tmp_path: Path) -> None:
    text = TEXTS["loop"].replace("from: beech, to: ash", "from: ash, to: beech")
    assert text != TEXTS["loop"]
    _, document = composed(tmp_path, text)
    was = table(work("loop").document, "flows").rows
    assert [[plain(cell) for cell in row.cells] for row in table(document, "flows").rows] == [
        [plain(cell) for cell in row.cells] for row in was
    ]


def test_a_network_alone_is_enough(tmp_path: Path) -> None:
    _, document = composed(tmp_path, TEXTS["plain"])
    said = " ".join(plain(parts) for parts in texts_of(section(document, "decision")))
    assert "No criteria are set." in said
    assert "not stated" in said
    basis = " ".join(plain(parts) for parts in texts_of(section(document, "basis")))
    assert "The datum of levels and elevations is not stated." in basis
    headings = [plain(block.parts) for block in section(document, "case-base").blocks if isinstance(block, Heading)]
    assert headings[0].startswith("Iterations")


def test_files_may_be_split_as_one_likes(tmp_path: Path) -> None:
    told = {name.stem: yaml.safe_load(name.read_text()) for name in DEMO.glob("*.yaml")}
    merged = {key: value for content in told.values() for key, value in content.items()}
    held = composed(tmp_path, yaml.safe_dump(merged, sort_keys=False, allow_unicode=True))
    assert results(*held) == results(work("demo").account, work("demo").document)
