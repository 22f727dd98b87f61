"""One YAML text: nodes with marks, and every problem where it stands. Both parsers must agree."""

from __future__ import annotations

import gc
from typing import Any

import pytest
import yaml
from hypothesis import given
from hypothesis import strategies as st

from calc.marks import Mark
from calc.problems import Problem, show
from calc.yamlfile import Entry, Mapping, Node, Scalar, Sequence, composer, read_text, source

LOADERS = [yaml.CSafeLoader, yaml.SafeLoader]


def read(content: bytes | str) -> tuple[Mapping | None, list[Problem]]:
    """Read with both parsers, which must give the same."""
    fast, slow = (read_text("f.yaml", content, loader) for loader in LOADERS)
    assert fast == slow
    assert fast[1] == sorted(fast[1])
    return fast


def text_at(place: Node | None) -> str:
    assert isinstance(place, Scalar)
    return place.text


def problems(content: bytes | str) -> list[tuple[str, int, int, str]]:
    """Return code, line, column and path of each problem."""
    return [(one.code, one.mark.line, one.mark.column, one.path) for one in read(content)[1]]


def test_the_fast_parser_is_used_where_it_is_present() -> None:
    assert composer.LOADER is yaml.CSafeLoader


def test_nodes_keep_their_places() -> None:
    text = "pipes:\n  upper-main:\n    bore: 384.4 mm  # inside\n    fittings: [{kind: 'bend-90'}, x]\n"
    mapping, found = read(text)
    assert found == []
    bore = Entry(Scalar("bore", Mark("f.yaml", 3, 5, 4)), Scalar("384.4 mm", Mark("f.yaml", 3, 11, 8), quoted=False))
    bend = Mapping(
        (
            Entry(
                Scalar("kind", Mark("f.yaml", 4, 17, 4)),
                Scalar("bend-90", Mark("f.yaml", 4, 23, 9), quoted=True),
            ),
        ),
        Mark("f.yaml", 4, 16),
    )
    items = Sequence((bend, Scalar("x", Mark("f.yaml", 4, 35))), Mark("f.yaml", 4, 15))
    fittings = Entry(Scalar("fittings", Mark("f.yaml", 4, 5, 8)), items)
    main = Mapping((bore, fittings), Mark("f.yaml", 3, 5))
    pipes = Mapping((Entry(Scalar("upper-main", Mark("f.yaml", 2, 3, 10)), main),), Mark("f.yaml", 2, 3))
    assert mapping == Mapping((Entry(Scalar("pipes", Mark("f.yaml", 1, 1, 5)), pipes),), Mark("f.yaml", 1, 1))
    assert main.keys() == ("bore", "fittings")
    assert main.get("bore") == bore.value
    assert main.get("lenght") is None


@pytest.mark.parametrize(
    "text",
    ["no", "12:30", "1e3", "007", "0x1F", "~", "null", "true", ".inf", "2026-11-02", "1_000", "=", "+1"],
)
def test_scalars_stay_as_written(text: str) -> None:
    mapping, found = read(f"key: {text}\n{text}: value\n")
    assert found == []
    assert mapping is not None
    assert mapping.get("key") == Scalar(text, Mark("f.yaml", 1, 6, len(text)))
    assert text_at(mapping.get(text)) == "value"


def test_an_empty_place_is_an_empty_text_and_quotes_are_told() -> None:
    mapping, found = read("a:\nb: ''\nc: \"null\"\nd: |\n  x\n  y\n")
    assert found == []
    assert mapping is not None
    assert mapping.get("a") == Scalar("", Mark("f.yaml", 1, 3))
    assert mapping.get("b") == Scalar("", Mark("f.yaml", 2, 4, 2), quoted=True)
    assert mapping.get("c") == Scalar("null", Mark("f.yaml", 3, 4, 6), quoted=True)
    assert mapping.get("d") == Scalar("x\ny\n", Mark("f.yaml", 4, 4), quoted=True)


def test_columns_count_characters_not_bytes() -> None:
    mapping, found = read("\ufeffé😀: µ²  # é\r\nb: x\r\n".encode())
    assert found == []
    assert mapping is not None
    assert mapping.get("é😀") == Scalar("µ²", Mark("f.yaml", 1, 5, 2))
    assert mapping.get("b") == Scalar("x", Mark("f.yaml", 2, 4))


@pytest.mark.parametrize("text", ["", "\n\n", "# only a comment\n", "---\n", "\ufeff", "---\n...\n"])
def test_a_file_without_content_is_an_empty_mapping(text: str) -> None:
    assert read(text) == (Mapping((), Mark("f.yaml", 1, 1)), [])


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("a: 1\nb: {c: 1, c: 2}\na: 3\n", [("duplicate-key", 2, 11, "b"), ("duplicate-key", 3, 1, "")]),
        ("a: &x 1\n", [("yaml-anchor", 1, 4, "a")]),
        ("a: [1, *x]\n", [("yaml-alias", 1, 8, "a[2]")]),
        ("p: {a: {<<: {b: 1}}}\n", [("merge-key", 1, 9, "p.a")]),
        ("a: !!python/object/apply:os.system [ls]\n", [("yaml-tag", 1, 4, "a")]),
        ("a: ! 1\n", [("yaml-tag", 1, 4, "a")]),
        ("? [x]\n: 1\nb: 2\n", [("complex-key", 1, 3, "")]),
        ("a: 1\n?\n: 1\n", [("empty-key", 2, 2, "")]),
        ("a: [\n", [("yaml-syntax", 1, 5, "")]),
        ("a: 1\n---\nb: 1\n", [("several-documents", 2, 1, "")]),
        ("- a\n- b\n", [("not-a-mapping", 1, 1, "")]),
        ("bore 150 mm\n", [("not-a-mapping", 1, 1, "")]),
        ("a:\n\tb: 1\n", [("tab", 2, 1, "")]),
        ("a: 1\t# x\nb: 2\tz\n", [("tab", 1, 5, ""), ("tab", 2, 5, "")]),
        ("a: \x07\n", [("control-character", 1, 4, "")]),
        ("a: b\n\nc: d\u202ee\n", [("control-character", 3, 5, "")]),
        ("a: x\ufeff\n", [("control-character", 1, 5, "")]),
        ('a: "x\\0"\n', [("control-character", 1, 4, "a")]),
        (b"a: b\nc: \xff\n", [("not-utf-8", 2, 4, "")]),
        ("a: b\n".encode("utf-16"), [("not-utf-8", 1, 1, "")]),
        ("a: 'x\nb: 1\n", [("yaml-syntax", 1, 4, "")]),
        ("a: [1, 2\nb: 3\n", [("yaml-syntax", 1, 4, "")]),
        ("a: {b: 1\n", [("yaml-syntax", 1, 4, "")]),
        ("a: b: c\n", [("yaml-syntax", 1, 5, "")]),
        ("a: @x\n", [("yaml-syntax", 1, 4, "")]),
        ("a: 1\n b: 2\n", [("yaml-syntax", 2, 3, "")]),
        ("a: 'x' y\n", [("yaml-syntax", 1, 8, "")]),
        ("a: |x\n b\n", [("yaml-syntax", 1, 5, "")]),
        ("a: 1\nb\nc: 2\n", [("yaml-syntax", 3, 1, "")]),
        ("a: *\n", [("yaml-syntax", 1, 5, "")]),
        ("%YAML 3.0\n---\na: 1\n", [("yaml-syntax", 1, 1, "")]),
        ("}\n", [("yaml-syntax", 1, 1, "")]),
        ("a: 1\na: 2\nb: ]\n", [("duplicate-key", 2, 1, ""), ("yaml-syntax", 3, 4, "")]),
    ],
)
def test_problems_stand_where_they_are(text: bytes | str, expected: list[tuple[str, int, int, str]]) -> None:
    assert problems(text) == expected


def test_a_refused_key_drops_its_value_and_the_first_of_two_stays() -> None:
    mapping, _ = read("a: 1\na: {x: {y: [2]}}\n? [q]\n: {z: 3}\nb: 4\n")
    assert mapping is not None
    assert mapping.keys() == ("a", "b")
    assert text_at(mapping.get("a")) == "1"


def test_problems_are_shown_with_line_and_way_out() -> None:
    text = "pipes:\n  a:\n    bore: 1 m\n    bore: 2 m\n"
    (problem,) = read(text)[1]
    assert show(problem, {"f.yaml": text}) == (
        "f.yaml:4:5: pipes.a: the key 'bore' stands twice, first at f.yaml:3:5; expected each key once\n"
        "  4 |     bore: 2 m\n"
        "    |     ^^^^\n"
        "  hint: remove or rename one of the two"
    )


@pytest.mark.parametrize("loader", LOADERS)
@pytest.mark.parametrize("text", ["[" * 200_000, "a: " + "{a: " * 200, "- " * 5000, "? " * 5000])
def test_deep_nesting_is_refused(text: str, loader: type[Any]) -> None:
    mapping, found = read_text("f.yaml", text, loader)
    assert mapping is None
    assert [one.code for one in found] == ["too-deep"]


def test_thirty_levels_are_read() -> None:
    assert problems("a: " + "[" * 29 + "]" * 29) == []
    assert [one[0] for one in problems("a: " + "[" * 30 + "]" * 30)] == ["too-deep"]


def test_a_bomb_of_aliases_is_never_expanded() -> None:
    lines = ["a0: &a0 [x, x]"] + [f"a{n}: &a{n} [*a{n - 1}, *a{n - 1}, *a{n - 1}]" for n in range(1, 60)]
    mapping, found = read("\n".join(lines))
    assert mapping is not None
    assert {one.code for one in found} == {"yaml-anchor", "yaml-alias"}
    assert len(found) == 60 + 59 * 3


def test_limits_end_a_file(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(composer, "MOST_NODES", 10)
    assert [one[0] for one in problems("a: [1, 2, 3, 4, 5, 6, 7]\n")] == []
    assert [one[0] for one in problems("a: [1, 2, 3, 4, 5, 6, 7, 8]\n")] == ["too-large"]


def test_a_file_with_too_many_problems_is_given_up_aloud() -> None:
    mapping, found = read("a: 1\n" * 3000)
    assert mapping is None
    assert len(found) == source.MOST_PROBLEMS + 1
    assert found[-1].code == "too-many-problems"


def test_messages_stay_short_and_printable() -> None:
    key = "k\\n" * 5000
    for one in read(f'"{key}": 1\n"{key}": 2\n')[1]:
        assert one.found.isprintable()
        assert len(one.found) < 200


def test_the_collector_is_left_as_it_was() -> None:
    assert gc.isenabled()
    read_text("f.yaml", "a: [")
    assert gc.isenabled()
    gc.disable()
    try:
        read_text("f.yaml", "a: 1")
        assert not gc.isenabled()
    finally:
        gc.enable()


def plain(node: Node) -> object:
    """Return a node as lists and dictionaries of text."""
    if isinstance(node, Scalar):
        return node.text
    if isinstance(node, Sequence):
        return [plain(item) for item in node.items]
    return {entry.key.text: plain(entry.value) for entry in node.entries}


WRITABLE = st.text(st.characters(codec="utf-8", categories=["L", "N", "P", "S", "Zs"]), max_size=12)
TREES = st.dictionaries(
    WRITABLE,
    st.recursive(
        WRITABLE,
        lambda inner: st.lists(inner, max_size=4) | st.dictionaries(WRITABLE, inner, max_size=4),
        max_leaves=20,
    ),
    max_size=5,
)


@given(TREES, st.sampled_from([None, False, True]), st.booleans())
def test_what_another_writer_writes_is_read(
    tree: dict[str, object],
    flow: bool | None,  # noqa: FBT001 - drawn, not called
    ascii_only: bool,  # noqa: FBT001
) -> None:
    # The writer of the YAML library is the outside witness: it writes the tree, both parsers read it back.
    text = yaml.safe_dump(tree, default_flow_style=flow, allow_unicode=not ascii_only, sort_keys=False)
    mapping, found = read(text)
    assert found == []
    assert mapping is not None
    assert plain(mapping) == tree


PIECES = [
    "a",
    "1 m",
    ": ",
    ":",
    "\n",
    "\n  ",
    "- ",
    "[",
    "]",
    "{",
    "}",
    ", ",
    "'",
    '"',
    " #",
    "&x ",
    "*x",
    "!t ",
]
PIECES += [
    "? ",
    "|",
    ">",
    "---",
    "\n---\n",
    "%",
    "@",
    "\\",
    "\\x00",
    "<<",
    "é",
    "😀",
    "\u2028",
    "\x85",
    "\t",
    "\r\n",
]


@given(st.lists(st.sampled_from(PIECES), max_size=20).map("".join), st.sampled_from(LOADERS))
def test_any_text_gives_nodes_or_problems(text: str, loader: type[Any]) -> None:
    mapping, found = read_text("f.yaml", text, loader)
    assert mapping is not None or found
    lines = text.splitlines() or [""]
    for one in found:
        assert not one.found.startswith("YAML cannot read this"), one.found
        assert 1 <= one.mark.line <= len(lines) + 1
        assert show(one, {"f.yaml": text})


@given(st.binary(max_size=60))
def test_any_bytes_give_nodes_or_problems(content: bytes) -> None:
    mapping, found = read_text("f.yaml", content)
    assert mapping is not None or found
