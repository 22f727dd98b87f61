"""Tables read like mappings, and say where each cell stands."""

from __future__ import annotations

from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st

from calc.marks import Mark
from calc.problems import show
from calc.yamlfile import Mapping, Node, Scalar, Sequence, Table, read_table, read_text, source

ASKED = Scalar("pipes.csv", Mark("network.yaml", 3, 16, 9))


def read(folder: Path, content: str | bytes) -> Table:
    (folder / "pipes.csv").write_bytes(content if isinstance(content, bytes) else content.encode())
    return read_table(folder, ASKED, "pipes")


def codes(found: Table) -> list[tuple[str, str, str]]:
    return [(one.code, str(one.mark), one.path) for one in found.problems]


def plain(node: Node) -> object:
    if isinstance(node, Scalar):
        return node.text
    if isinstance(node, Sequence):
        return [plain(item) for item in node.items]
    return {entry.key.text: plain(entry.value) for entry in node.entries}


def test_a_table_reads_as_the_same_network_in_yaml(tmp_path: Path) -> None:
    written = "bore [mm],length [m],id,from,to,law\n384.4,1850,upper-main,upper,marl-cross,\n"
    mapping, _ = read_text("network.yaml", "upper-main: {bore: 384.4 mm, length: 1850 m, from: upper, to: marl-cross}")
    found = read(tmp_path, written)
    assert found.problems == []
    assert mapping is not None
    assert plain(found.rows) == plain(mapping)
    assert found.text == written
    assert found.file is not None
    assert (found.file.name, found.file.content) == ("pipes.csv", written.encode())


def test_cells_keep_their_places(tmp_path: Path) -> None:
    found = read(tmp_path, '\ufeffid, bore [mm] ,note\r\n\r\né,  384.4 ,"a, ""b"""\r\n')
    assert found.problems == []
    (entry,) = found.rows.entries
    assert entry.key == Scalar("é", Mark("pipes.csv", 3, 1, 1))
    assert isinstance(entry.value, Mapping)
    bore, note = entry.value.entries
    assert bore == (
        Scalar("bore", Mark("pipes.csv", 1, 5, 9)),
        Scalar("384.4 mm", Mark("pipes.csv", 3, 5, 5)),
    )
    assert note.value == Scalar('a, "b"', Mark("pipes.csv", 3, 12, 8), quoted=True)


def test_a_heading_may_say_that_there_is_no_unit(tmp_path: Path) -> None:
    found = read(tmp_path, "id,friction_factor [-],count []\na,0.02,3\n")
    assert found.problems == []
    assert plain(found.rows) == {"a": {"friction_factor": "0.02", "count": "3"}}


@pytest.mark.parametrize(
    ("content", "expected"),
    [
        ("", [("empty-table", "pipes.csv:1:1", "pipes")]),
        ("\n \n", [("empty-table", "pipes.csv:1:1", "pipes")]),
        ("bore [mm]\n3\n", [("no-id-column", "pipes.csv:1:1", "pipes")]),
        ("id,a,a [m]\n", [("duplicate-heading", "pipes.csv:1:6", "pipes")]),
        ("id,,b]\n", [("bad-heading", "pipes.csv:1:4", "pipes"), ("bad-heading", "pipes.csv:1:5", "pipes")]),
        ("id [m],a\nx,1\n", [("bad-heading", "pipes.csv:1:1", "pipes")]),
        ("id;a\nb;c\n", [("table-divider", "pipes.csv:1:1", "pipes")]),
        ("id\ta\nb\tc\n", [("table-divider", "pipes.csv:1:1", "pipes")]),
        ('id,"a\n', [("open-quote", "pipes.csv:1:1", "pipes")]),
        ('id,a\nx,"a"b\n', [("open-quote", "pipes.csv:2:1", "pipes")]),
        ("id,a\nx\nz,1\n", [("ragged-row", "pipes.csv:2:1", "pipes")]),
        ("id,a\nz,1\nx,1,2\n", [("ragged-row", "pipes.csv:3:1", "pipes")]),
        ("a,id\n1,x\n2,x\n", [("duplicate-id", "pipes.csv:3:3", "pipes.x")]),
        ("a,id\n1, \n", [("missing-id", "pipes.csv:2:4", "pipes")]),
        ("id,a [m]\nx,3 mm\nz,1e3\n", [("not-a-number", "pipes.csv:2:3", "pipes.x.a")]),
        ("id,a [m]\nz,1e3\ny,nan\n", [("not-a-number", "pipes.csv:3:3", "pipes.y.a")]),
        (b"id\n\xff\n", [("not-utf-8", "pipes.csv:2:1", "")]),
        ("id\nx\x00\n", [("control-character", "pipes.csv:2:2", "")]),
        (",".join(f"a{n}" for n in range(101)), [("too-large", "pipes.csv:1:1", "pipes")]),
    ],
)
def test_problems_stand_where_they_are(
    tmp_path: Path, content: str | bytes, expected: list[tuple[str, str, str]]
) -> None:
    found = read(tmp_path, content)
    assert codes(found) == expected
    assert found.problems == sorted(found.problems)
    assert found.file is not None


def test_a_problem_is_shown_with_its_row(tmp_path: Path) -> None:
    found = read(tmp_path, "id,bore [mm]\na,384.4\na,300\n")
    assert show(found.problems[0], {"pipes.csv": found.text}) == (
        "pipes.csv:3:1: pipes.a: the id 'a' stands twice, first at pipes.csv:2:1; expected each id once\n"
        "  3 | a,300\n"
        "    | ^"
    )


@pytest.mark.parametrize(
    ("cell", "hint"),
    [
        ("1 000", "write the digits of a number without gaps, and a point before its decimals"),
        ('"1,000.5"', "write the digits of a number without gaps, and a point before its decimals"),
        ('"0,15"', "write the digits of a number without gaps, and a point before its decimals"),
        ("1850 m", "the unit stands in the header"),
        ("many", "the unit stands in the header"),
    ],
)
def test_a_number_with_gaps_is_told_apart_from_one_with_a_unit(tmp_path: Path, cell: str, hint: str) -> None:
    (found,) = read(tmp_path, f"id,length [m]\na,{cell}\n").problems
    assert (found.code, found.hint) == ("not-a-number", hint)


def test_a_table_without_a_name_is_told_as_that(tmp_path: Path) -> None:
    (found,) = read_table(tmp_path, Scalar("", Mark("network.yaml", 2, 16)), "pipes").problems
    assert (found.code, found.found) == ("unreadable", "no file is named here")


@pytest.mark.parametrize(
    ("name", "code"),
    [
        ("../secret.csv", "outside-folder"),
        ("/etc/passwd", "outside-folder"),
        ("tables/../../secret.csv", "outside-folder"),
        ("C:\\secret.csv", "outside-folder"),
        ("link.csv", "outside-folder"),
        ("away/secret.csv", "outside-folder"),
        ("none.csv", "no-file"),
        ("tables", "unreadable"),
        (".", "unreadable"),
        ("", "unreadable"),
        ("a\0b", "unreadable"),
        ("x" * 5000, "unreadable"),
        ("pipes.csv/x", "unreadable"),
    ],
)
def test_a_table_lies_in_the_folder(tmp_path: Path, name: str, code: str) -> None:
    folder = tmp_path / "project"
    (folder / "tables").mkdir(parents=True)
    (folder / "pipes.csv").write_text("id\na\n")
    (tmp_path / "secret.csv").write_text("id\na\n")
    (folder / "link.csv").symlink_to(tmp_path / "secret.csv")
    (folder / "away").symlink_to(tmp_path)
    found = read_table(folder, Scalar(name, ASKED.mark), "pipes")
    assert [(one.code, one.mark, one.path) for one in found.problems] == [(code, ASKED.mark, "pipes")]
    assert found.file is None
    assert found.rows.entries == ()


def test_a_table_may_lie_deeper(tmp_path: Path) -> None:
    (tmp_path / "tables").mkdir()
    (tmp_path / "tables" / "pipes.csv").write_text("id,a\nx,1\n")
    found = read_table(tmp_path, Scalar("tables/pipes.csv", ASKED.mark))
    assert found.problems == []
    assert found.rows.entries[0].key.mark == Mark("tables/pipes.csv", 2, 1, 1)


def test_a_table_with_too_many_problems_is_given_up_aloud(tmp_path: Path) -> None:
    found = read(tmp_path, "id,a\n" + "x\n" * 5000)
    assert len(found.problems) == source.MOST_PROBLEMS + 1
    assert found.problems[-1].code == "too-many-problems"


def test_blanks_and_quotes_cost_no_more_than_their_length(tmp_path: Path) -> None:
    # A pattern that backtracks would take hours on these.
    blanks = " " * 200_000
    assert codes(read(tmp_path, f'id,a\nx,{blanks}y{blanks}"\n'))[0][0] == "open-quote"
    assert codes(read(tmp_path, f"id,a{blanks}b [{blanks}\n"))[0][0] == "bad-heading"
    assert codes(read(tmp_path, 'id,a\nx,"' + '""' * 200_000 + "\n"))[0][0] == "open-quote"


CELLS = st.text(st.characters(codec="utf-8", categories=["L", "N", "P", "S"]), min_size=1, max_size=8)


@given(st.dictionaries(CELLS, st.tuples(CELLS, CELLS), max_size=6))
def test_what_is_written_quoted_is_read(
    tmp_path_factory: pytest.TempPathFactory, rows: dict[str, tuple[str, str]]
) -> None:
    def quoted(text: str) -> str:
        return '"' + text.replace('"', '""') + '"'

    lines = ["first,id,second"] + [",".join(map(quoted, (a, key, b))) for key, (a, b) in rows.items()]
    found = read(tmp_path_factory.getbasetemp(), "\n".join(lines))
    assert found.problems == []
    assert plain(found.rows) == {key: {"first": a, "second": b} for key, (a, b) in rows.items()}


@given(st.text(st.sampled_from('a,"[] \n;\t1é'), max_size=40))
def test_any_text_gives_rows_or_problems(tmp_path_factory: pytest.TempPathFactory, content: str) -> None:
    found = read(tmp_path_factory.getbasetemp(), "id," + content)
    for one in found.problems:
        assert show(one, {"pipes.csv": found.text})
