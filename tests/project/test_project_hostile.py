"""Hostile inputs: they end in problems, in bounded time, and in messages of bearable length."""

from __future__ import annotations

import time
from pathlib import Path

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st
from project_folders import SOUND, problems_in, read, with_line

from calc.problems import ProblemsFound, show
from calc.project import CODES, network, read_project

LONG = "x" * 10_000


@pytest.mark.parametrize(
    "value",
    [
        "nan", "-inf m", "1e999 m", "1e-999 m", "0x10 m",
        "1_000 m", "1,850 m", "\uff11\uff18 m", "1850 мm", "__import__('os')",
        "1850 m; rm -rf /", "1850 m m", "=1+1", "'{{7*7}}'", "9" * 400 + " m",
        LONG, "~", "", "[]", "{}", "true",
    ],
)  # fmt: skip
def test_a_hostile_length_is_one_problem(tmp_path: Path, value: str) -> None:
    (found,) = problems_in(tmp_path, with_line("length: 1850 m", f"length: {value}"))
    assert found.mark.line == 10
    assert len(found.sentence()) < 400


@pytest.mark.parametrize(
    "name", ["../up", "a b", "a.b", "a/b", "m\u0430rl", "\ufb01", "x" * 65, "a\\u0000", "*", "é", "-" * 65, "<b>"]
)
def test_an_id_is_letters_digits_underscores_and_hyphens(tmp_path: Path, name: str) -> None:
    found = problems_in(tmp_path, with_line("  marl-cross: {", f'  "{name}": {{}}\n  marl-cross: {{'))
    assert [problem.code for problem in found] in (["bad-id"], ["control-character"])


def test_a_letter_that_only_looks_latin_is_told_apart(tmp_path: Path) -> None:
    """The second letter of the node named here is Cyrillic."""
    (found,) = problems_in(tmp_path, with_line("to: marl-cross", "to: m\u0430rl-cross"))
    assert (found.code, found.hint) == ("unknown-node", "did you mean 'marl-cross'?")
    (found,) = problems_in(tmp_path, with_line("  marl-cross: {", "  m\u0430rl: {}\n  marl-cross: {"))
    assert found.hint == "a letter here only looks like one of a to z"


@pytest.mark.parametrize(
    "text",
    [
        f"{LONG}: 1\n",
        f"fluid: {{{LONG}: 1}}\n",
        f"people: {{{LONG}: {{}}}}\n",
        f"criteria: {{{LONG}: {{}}}}\n",
        f"cases: {{{LONG}: {{}}}}\n",
        f"cases: {{a: {{after: {LONG}}}}}\n",
        f"cases: {{a: {{with: {{{LONG}: 1}}}}}}\n",
        f"cases: {{a: {{with: {{pipes.{'*a' * 5000}.bore: 1}}}}}}\n",
        f"solver: {{start: {{{LONG}: 1 m}}}}\n",
        f"solver: {{method: {LONG}}}\n",
        f"friction: {LONG}\n",
        f"references: {{{LONG}: {{}}}}\n",
        f"revisions: [{{revision: {LONG}, date: {LONG}, change: {LONG}}}]\n",
        f"assumptions: {{A: {{text: x, basis: {LONG}, affects: [{LONG}]}}}}\n",
        'people: {"a\\nb": {}}\n',
    ],
)
def test_messages_stay_short_and_on_one_line(tmp_path: Path, text: str) -> None:
    found = problems_in(tmp_path, SOUND + text)
    assert found
    for problem in found:
        assert len(problem.sentence()) < 700
        assert len(problem.hint) < 200
        assert problem.sentence().isprintable()


def test_a_pattern_of_many_stars_takes_no_time(tmp_path: Path) -> None:
    names = "\n".join(f"  {'a' * 60}-{n}: {{}}" for n in range(200))
    text = with_line("  marl-cross: {", f"{names}\n  marl-cross: {{")
    start = time.process_time()
    problems_in(tmp_path, text + f"cases: {{a: {{with: {{junctions.{'*a' * 60}*b.withdrawal: 1 L/s}}}}}}\n")
    assert time.process_time() - start < 20.0


def test_very_many_wrong_names_are_told_in_bounded_time(tmp_path: Path) -> None:
    nodes = "\n".join(f"  n-{n}: {{}}" for n in range(1000))
    pipes = "\n".join(
        f"  p-{n}: {{from: upper, to: m-{n}, length: 1 m, bore: 1 m, roughness: 1 mm}}" for n in range(3000)
    )
    text = with_line("  marl-cross: {", f"{nodes}\n  marl-cross: {{") + pipes + "\n"
    start = time.process_time()
    found = problems_in(tmp_path, text)
    assert time.process_time() - start < 60.0
    assert len([problem for problem in found if problem.code == "unknown-node"]) == 3000


@pytest.mark.parametrize("name", ["../network.yaml", "/etc/passwd", "missing.csv", "network.yaml\\0", ".", "''"])
def test_a_table_stays_in_the_folder(tmp_path: Path, name: str) -> None:
    quoted = name if name == "''" else f'"{name}"'
    assert problems_in(tmp_path, f"reservoirs: {{table: {quoted}}}\npipes: {{}}\n")


def test_yaml_that_does_not_parse_is_the_only_problem(tmp_path: Path) -> None:
    """Nothing is said of pipes and reservoirs that could not be seen."""
    found = problems_in(tmp_path, "reservoirs: {upper: {level: 214.60 m}\npipes: [\n")
    assert len(found) == 1


def test_an_alias_is_told_once(tmp_path: Path) -> None:
    text = with_line("length: 1850 m", "length: &long 1850 m").replace("length: 1200 m", "length: *long")
    assert [problem.code for problem in problems_in(tmp_path, text)] == ["yaml-anchor", "yaml-alias"]


def test_a_folder_that_is_not_there(tmp_path: Path) -> None:
    with pytest.raises(ProblemsFound):
        read_project(tmp_path / "nowhere", ())
    assert problems_in(tmp_path / "empty", "")


WORDS = st.sampled_from(
    [*SOUND.replace("\n", " \n ").split(" "), "{", "}", "[", "]", "value:", "1e9 m", "-", "null", "''"]
)


@settings(max_examples=150, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(line=st.integers(0, 17), words=st.lists(WORDS, max_size=6), keep=st.booleans())
def test_a_garbled_line_ends_in_problems_or_a_project(
    *, tmp_path: Path, line: int, words: list[str], keep: bool
) -> None:
    """Whatever one line becomes, reading gives a project whose arrays are whole, or problems that can be shown."""
    lines = SOUND.splitlines()
    before = lines[line]
    head = before[: len(before) - len(before.lstrip())] + (before.strip().partition(" ")[0] + " " if keep else "")
    lines[line] = head + " ".join(words)
    try:
        project = read(tmp_path, "\n".join(lines) + "\n")
    except ProblemsFound as found:
        assert all(show(problem, found.texts) for problem in found.problems)  # noqa: PT017 - either may come
    else:
        assert len(network(project, "base", 1e-6).pipes.rows) == len(project.pipes)


def test_codes_are_words_joined_by_hyphens() -> None:
    assert all(code == code.lower() and "-" in code and words for code, words in CODES.items())
