"""What a package says and in what order; that each number leads to the ledger, and each citation to a line."""

from __future__ import annotations

import re
from itertools import pairwise

import pytest
from pages import every_part, figure_of, numbers, parts_within, plain, row_of, section, table, tables, texts_of
from works import NAMES, work

from calc import pipeline
from calc.account import CHECKS, Account, gathered
from calc.ledger import Column, Combined, Converted, Derived, Given, Judged, Library, Program, Solved, Spot, proofs
from calc.ledger.origin import Combined as Total
from calc.physics.empirical import EMPIRICAL_LAWS
from calc.report.composer import inputs_of
from calc.report.document import (
    Bullets,
    Cite,
    Document,
    Figure,
    Formula,
    Heading,
    Index,
    Listing,
    Number,
    Paragraph,
    Row,
    SignOff,
    Table,
)
from calc.report.figures import Balance, Convergence, Schematic
from calc.report.numbers import written
from calc.report.sections.findings import MOST_SUBJECTS

FLOWS = {"L/s": (1000, 1), "m³/s": (1, 4), "gpm": (60 / (231 * 0.0254**3), 0), "ft³/s": (0.3048**-3, 3)}
"""How many of a unit of flow make one cubic metre a second, by its definition; and its places on the first page."""
EVERY = pytest.mark.parametrize("name", NAMES)
ADDRESS = re.compile(r"\d+\.\d+")


def rows_of(document: Document) -> list[tuple[str, tuple[str, ...]]]:
    return [(row.address, row.refs) for held in tables(document) for row in held.rows if row.tone != "group"]


# --- every number has its origin --------------------------------------------------------------------------------


@EVERY
def test_every_number_is_a_ledger_value_written_in_its_format(name: str) -> None:
    held = work(name)
    seen = 0
    for number in numbers(held.document):
        spot = held.account.ledger.spot(number.ref)
        assert spot.id == number.ref
        assert number.text == written(spot.value, spot.column.kind, number.form)
        seen += 1
    assert seen > 100


@EVERY
def test_plain_words_hold_no_figure(name: str) -> None:
    for part in every_part(work(name).document):
        if isinstance(part, str):
            assert not re.search(r"\d", part), part


@EVERY
def test_lines_are_numbered_in_order_and_once(name: str) -> None:
    for held in work(name).document.sections:
        addresses: list[str] = []
        for block in held.blocks:
            if isinstance(block, Table):
                addresses += [row.address for row in block.rows if row.tone != "group"]
            elif isinstance(block, Bullets):
                addresses += [address for address, _ in block.items]
        assert addresses == [f"{held.number}.{k}" for k in range(1, len(addresses) + 1)]
    assert [held.number for held in work(name).document.sections] == [
        str(k) for k in range(1, len(work(name).document.sections) + 1)
    ]


@EVERY
def test_a_number_stands_where_its_address_says(name: str) -> None:
    document = work(name).document
    first: dict[str, str] = {}
    for address, refs in rows_of(document):
        for ref in refs:
            first.setdefault(ref, address)
    assert document.addresses == first
    entries = next(block for block in section(document, "index").blocks if isinstance(block, Index)).entries
    assert entries == tuple(sorted(first.items()))


@EVERY
def test_every_citation_of_a_line_resolves(name: str) -> None:
    document = work(name).document
    known = {address for address, _ in rows_of(document)}
    sections = {held.number for held in document.sections}
    cites = [part for part in every_part(document) if isinstance(part, Cite)]
    assert len(cites) > 50
    for cite in cites:
        told = document.cited(cite)
        if not cite.into:
            assert told or all(rests_on_nothing(work(name).account, ref) for ref in cite.refs), cite
        for address in ADDRESS.findall(told):
            assert address in known
            assert address.partition(".")[0] in sections


def rests_on_nothing(account: Account, ref: str) -> bool:
    origin = account.ledger.spot(ref).column.origin
    return isinstance(origin, Program) or (isinstance(origin, Combined) and not len(origin.into))


def own_inputs(account: Account, ref: str) -> set[str]:
    """Return what a number rests on, by the ledger's origins read anew."""
    spot = account.ledger.spot(ref)
    match spot.column.origin:
        case Derived() as origin:
            law = origin.leaf
            takes = set(law.residual.takes) - {law.unknown} if hasattr(law, "residual") else set(law.takes)
            found = [origin.inputs[name].spot(spot.row) for name in takes]
        case Total() as origin:
            found = [origin.terms.spot(k) for k in range(len(origin.into)) if origin.into[k] == spot.row]
        case Judged() as origin:
            found = [origin.margin.spot(spot.row)]
        case Solved() as origin:
            proved = {proof.id for proof in proofs(account.ledger, spot.column, spot.row)}
            rests = (view.spot(spot.row) for view in origin.inputs.values())
            return proved | {Spot(*one).id for one in rests if one is not None}
        case Given() | Converted() | Library() | Program():
            found = []
        case other:
            raise AssertionError(other)
    return {Spot(*one).id for one in found if one is not None}


@EVERY
def test_what_is_cited_is_what_the_ledger_computed_from(name: str) -> None:
    held = work(name)
    ledger = held.account.ledger
    for ref in held.document.addresses:
        assert set(inputs_of(ledger, ledger.spot(ref))) == own_inputs(held.account, ref)


@EVERY
def test_into_is_from_turned_round(name: str) -> None:
    document, account = work(name).document, work(name).account
    forward = {
        (used, user)
        for user in document.addresses
        for ref in own_inputs(account, user)
        for used in document.behind.get(ref, (ref,))
        if used != user
    }
    assert forward == {(used, user) for used, users in document.used_by.items() for user in users}
    assert all(ref in document.addresses for pair in forward for ref in pair)


@EVERY
def test_worked_lines_cite_the_lines_of_their_operands(name: str) -> None:
    document, account = work(name).document, work(name).account
    for held in tables(document, "derivation-"):
        for row in held.rows:
            cite = next(part for part in parts_within(row.cells[3]) if isinstance(part, Cite))
            if row.refs:
                assert set(cite.refs) == own_inputs(account, row.refs[0])
            else:  # a conversion: of a number, by the worth of a unit
                formula = next(part for part in row.cells[0] if isinstance(part, Formula))
                assert set(cite.refs) == {number.ref for number in (formula.operands or {}).values()}


@EVERY
def test_inputs_in_use_lead_to_the_lines_that_use_them(name: str) -> None:
    document = work(name).document
    for held in tables(document, "inputs"):
        for row in held.rows:
            if row.tone != "group" and row.refs[0].split("@")[0].split(".")[-1] in ("level", "length", "bore"):
                cite = next(part for part in parts_within(row.cells[-1]) if isinstance(part, Cite))
                shut = row.refs[0] == "pipes.ash-beech-old.length@base"
                assert document.cited(cite) or shut, row.address


# --- what is said, in order -------------------------------------------------------------------------------------


@EVERY
def test_sections_stand_in_order(name: str) -> None:
    cases = [f"case-{case}" for case in work(name).account.cases]
    keys = [held.key for held in work(name).document.sections]
    assert keys == [
        *("decision", "contents", "basis", "inputs", "assumptions", "method"),
        *cases,
        *("judgement", "cautions", "references", "software", "record", "listing", "index"),
    ]


@EVERY
def test_each_case_is_told_in_order(name: str) -> None:
    account, document = work(name).account, work(name).document
    for case in account.cases.values():
        said = []
        for block in section(document, f"case-{case.id}").blocks:
            match block:
                case Table():
                    said.append(block.key.partition("-")[0])
                case Figure():
                    said.append(type(block.drawing).__name__)
                case _:
                    pass
        trials = case.solution.trials is not None
        expected = ["changes"] if account.project.cases[case.id].lines else []
        if case.solution.corrections is not None:
            printed = sorted({1, 2, case.solution.iterations})
            expected += ["loops", "start", *("sweep" for _ in printed), "worked", "sweeps"]
        else:
            expected += ["trials" if trials else "steps"]
        expected += ["stopping", "Convergence", *(["Balance"] if trials else [])]
        expected += ["derivation", "pipes", "losses"]
        expected += ["fittings"] if case.columns and case.columns.terms.fittings.rows else []
        expected += ["junctions", "continuity"] if account.project.junctions else []
        expected += ["energy", "second", "opinions"]
        assert said == expected


@EVERY
def test_every_evaluation_is_a_row(name: str) -> None:
    account, document = work(name).account, work(name).document
    for case in account.cases.values():
        trials, steps = case.solution.trials, case.solution.steps
        if trials is not None:
            assert len(table(document, f"trials-{case.id}").rows) == len(trials.head) == len(case.history)
            accepted = [row for row in table(document, f"trials-{case.id}").rows if "accepted" in plain(row.cells[-1])]
            assert len(accepted) == 1
            assert accepted[0].tone == "sum"
        if steps is not None:
            assert len(table(document, f"steps-{case.id}").rows) == len(steps.iteration) == len(case.history)


@EVERY
def test_figures_are_numbered_and_drawn_from_the_solution(name: str) -> None:
    account, document = work(name).account, work(name).document
    drawn = [block for held in document.sections for block in held.blocks if isinstance(block, Figure)]
    assert [block.number for block in drawn] == [str(k) for k in range(1, len(drawn) + 1)]
    assert sum(isinstance(block.drawing, Schematic) for block in drawn) == 1
    assert sum(isinstance(block.drawing, Convergence) for block in drawn) == len(account.cases)
    assert sum(isinstance(block.drawing, Balance) for block in drawn) == sum(
        case.solution.trials is not None for case in account.cases.values()
    )
    works = next(block.drawing for block in drawn if isinstance(block.drawing, Schematic))
    assert {pipe.name for pipe in works.pipes} == set(account.project.pipes)
    base = account.cases["base"].solution
    for pipe, flow in zip(works.pipes, base.flow.tolist(), strict=True):
        assert pipe.flow * flow > 0 or abs(flow) < 1e-5


@EVERY
def test_every_given_value_is_listed_with_source_place_and_text(name: str) -> None:
    account, document = work(name).account, work(name).document
    listed = {}
    for held in tables(document, "inputs"):
        for row in held.rows:
            for ref in row.refs:
                assert ref not in listed
                listed[ref] = held, row
    sources = {plain(row.cells[0]): plain(row.cells[1]) for held in tables(document, "sources") for row in held.rows}
    for column in account.ledger.columns:
        origin = column.origin
        if not isinstance(origin, Given | Converted | Library):
            continue
        for k in range(len(column.rows)):
            if column.group in ("verification", "record"):
                continue
            held, row = listed[column.id(k)]
            number = next(part for part in row.cells[2] if isinstance(part, Number))
            assert account.ledger.spot(number.ref).value == column.values[k]
            assert plain(row.cells[1]) == origin.written[k]
            assert plain(row.cells[5]) == origin.marks[k].place.removeprefix("calc/")
            said = plain(row.cells[4])
            if held.key == "inputs-shipped":
                key, _, within = said.partition(", ")
                assert origin.bases[k].endswith("; ".join(word for word in (sources[key], within) if word))
                assert_named(column, k, row)
            else:
                assert origin.bases[k] in said or "no source" in said
                statement = plain(row.cells[0])
                several = statement.endswith((" of each", " and others")) or column.rows[k] in statement
                assert several or len(row.refs) == 1


def test_what_one_line_of_a_case_sets_for_all_is_one_row() -> None:
    account, document = work("demo").account, work("demo").document
    factors = [column for column in account.ledger.columns if column.quantity == "withdrawal_factor"]
    assert factors
    for column in factors:
        held = [row for one in tables(document, "inputs") for row in one.rows if column.id(0) in row.refs]
        assert [row.refs for row in held] == [tuple(column.id(k) for k in range(len(column.rows)))]


@pytest.mark.parametrize("name", ["demo", "empirical-us"])
def test_no_method_and_no_convention_is_told_that_is_not_in_use(name: str) -> None:
    account, document = work(name).account, work(name).document
    used = {case.solution.method for case in account.cases.values()}
    told = [plain(row.cells[0]) for row in table(document, "method").rows]
    begun = {"bracketing": "Bracketing,", "newton": "Newton,", "loop-correction": "Loop correction,"}
    assert {method for method, words in begun.items() if any(said.startswith(words) for said in told)} == used
    said = [plain(row.cells[0]) for row in table(document, "conventions").rows]
    laws = {pipe.text("law") for pipe in account.project.pipes.values()}
    assert any("Hazen–Williams and Manning have no friction factor" in words for words in said) == bool(
        laws & EMPIRICAL_LAWS.keys()
    )
    assert any("Darcy f throughout" in words for words in said) == bool(laws - EMPIRICAL_LAWS.keys())


def assert_named(column: Column, k: int, row: Row) -> None:
    """A line that stands for several numbers names each, or what is silent of it; and where each was chosen."""
    origin, statement = column.origin, plain(row.cells[0])
    assert isinstance(origin, Library)
    words = {"hazen_williams_c": "Hazen–Williams C", "manning_n": "Manning n", "K_reverse": "K in reverse"}
    assert words.get(column.quantity, column.quantity.replace("_", " ")) in statement
    if "of all that state none" in statement:
        assert origin.marks[k].place.startswith("calc/data/defaults.yaml")
        return
    assert column.rows[k] in statement or statement.endswith("and others") or not column.rows[k]
    for place in re.findall(r" at (\S+):(\d+):\d+; ", origin.bases[k]):
        assert all(word in statement for word in place)


@EVERY
def test_listing_is_the_bytes_that_were_read(name: str) -> None:
    account, document = work(name).account, work(name).document
    listings = [block for block in section(document, "listing").blocks if isinstance(block, Listing)]
    assert [block.name for block in listings] == [file.name for file in account.project.files]
    for block, file in zip(listings, account.project.files, strict=True):
        assert "\n".join(block.lines).rstrip("\n").encode() == file.content.rstrip(b"\n")


@EVERY
def test_a_place_leads_to_the_line_of_the_listing_that_holds_the_text(name: str) -> None:
    document = work(name).document
    lines = {block.name: block.lines for block in section(document, "listing").blocks if isinstance(block, Listing)}
    followed = 0
    for held in tables(document, "inputs"):
        for row in held.rows:
            file, _, line = plain(row.cells[5]).partition(":") if row.tone != "group" else ("", "", "")
            if file in lines:
                assert plain(row.cells[1]) in lines[file][int(line) - 1]
                followed += 1
    assert followed >= 5


@EVERY
def test_equations_have_source_and_range_and_the_source_is_told_in_full(name: str) -> None:
    document = work(name).document
    told = {plain(row.cells[0]) for row in table(document, "sources").rows}
    worked = {
        part.law.name
        for held in tables(document, "derivation-")
        for row in held.rows
        for part in parts_within(row.cells[0])
        if hasattr(part, "law")
    }
    printed = set()
    for row in table(document, "equations").rows:
        assert plain(row.cells[1]) in told
        assert plain(row.cells[2])
        printed |= {part.law.name for part in parts_within(row.cells[0]) if hasattr(part, "law")}
    assert worked <= printed


@EVERY
def test_a_symbol_has_one_meaning(name: str) -> None:
    seen: dict[str, str] = {}
    for row in table(work(name).document, "symbols").rows:
        for k in (0, 3):
            symbol, words = plain(row.cells[k]), plain(row.cells[k + 1])
            assert not symbol or seen.setdefault(symbol, words) == words, symbol


def test_assumptions_and_references_of_the_demo_are_all_told() -> None:
    account, document = work("demo").account, work("demo").document
    rows = table(document, "assumptions").rows
    assert [plain(row.cells[0]) for row in rows] == list(account.project.assumptions)
    assert [("open" in plain(row.cells[2])) for row in rows] == [
        one.text("state") == "open" for one in account.project.assumptions.values()
    ]
    assert [plain(row.cells[0]) for row in table(document, "references").rows] == list(account.project.references)


@EVERY
def test_defaults_are_told_as_assumptions(name: str) -> None:
    rows = table(work(name).document, "defaults").rows
    assert [plain(row.cells[0]) for row in rows] == [path for path, _ in work(name).account.project.defaults]
    assert "site.gravity" in [plain(row.cells[0]) for row in rows] or name == "demo"


def test_cautions_say_who_answers_and_what_is_left_out() -> None:
    said = " ".join(plain(parts) for parts in texts_of(section(work("demo").document, "cautions")))
    for words in ("licensed engineer", "codes", "not the independent check", "steady", "Surge", "as entered"):
        assert words in said


# --- the first page ---------------------------------------------------------------------------------------------


@EVERY
def test_the_first_page_tells_where_the_water_goes(name: str) -> None:
    account, document = work(name).account, work(name).document
    held = table(document, "flows")
    cases = [case for case in account.cases.values() if case.columns is not None]
    assert len(held.columns) == 1 + 2 * len(cases)
    for pipe, record in account.project.pipes.items():
        row = row_of(held, pipe)
        for k, case in enumerate(cases):
            at = case.network.pipes.rows.index(pipe)
            flow = float(case.solution.flow[at])
            words, size = plain(row.cells[1 + 2 * k]), plain(row.cells[2 + 2 * k])
            if not case.network.open[at]:
                assert (words, size) == ("shut", "–")
                continue
            way = "at rest" if flow == 0 else f"to {record.text('to') if flow > 0 else record.text('from')}"
            assert words == way
            factor, places = FLOWS[plain(held.columns[0].head).removeprefix("flow, ")]
            assert size == f"{abs(flow) * factor:.{places}f}"


@EVERY
def test_directions_are_those_of_falling_head(name: str) -> None:
    document = work(name).document
    for k, case in enumerate(c for c in work(name).account.cases.values() if c.columns is not None):
        for row in table(document, f"pipes-{case.id}").rows:
            start, end = (figure_of(row.cells[j]) for j in (2, 4))
            lost = figure_of(row.cells[5])
            if start is None or end is None or lost is None:
                continue
            pipe, source, goal = plain(row.cells[0]), plain(row.cells[1]), plain(row.cells[3])
            fall = work(name).account.ledger.spot(lost.ref).value
            way = "at rest" if fall == 0 else f"to {goal if fall > 0 else source}"
            if not case.network.open[case.network.pipes.rows.index(pipe)]:
                way = "shut"
                assert way in map(plain, row.cells)
            assert plain(row_of(table(document, "flows"), pipe).cells[1 + 2 * k]) == way


@EVERY
def test_figures_of_the_first_page_have_units(name: str) -> None:
    document = work(name).document
    page = section(document, "decision")
    for held in page.blocks:
        if not isinstance(held, Table):
            continue
        units = [k for k, column in enumerate(held.columns) if column.role == "unit"]
        for row in held.rows:
            figures = [part for cell in row.cells for part in parts_within(cell) if hasattr(part, "form")]
            for number in figures:
                beside = number.with_unit or any(plain(row.cells[k]) == number.form.unit for k in units)
                ahead = plain(held.columns[0].head).endswith(f", {number.form.unit}")
                named = plain(row.cells[0]).endswith(f", {number.form.unit}")
                assert beside or ahead or named, row.address


def test_what_is_not_met_stands_first() -> None:
    for name in ("demo", "dry", "loop"):
        account, document = work(name).account, work(name).document
        failing = [one for one in account.verdicts if not one.met]
        assert failing
        page = section(document, "decision")
        opening = next(block for block in page.blocks if isinstance(block, Paragraph))
        said = plain(opening.parts)
        for one in failing:
            assert one.criterion.title.lower() in said
            assert one.governing is not None
            assert f"at {one.governing.subject} in case {one.governing.case}" in said
        rows = table(document, "criteria").rows
        verdicts = [plain(row.cells[6]) for row in rows]
        assert verdicts == ["not met"] * len(failing) + ["met"] * (len(rows) - len(failing))
        assert [row.tone for row in rows] == ["flag" if verdict == "not met" else "" for verdict in verdicts]


@EVERY
def test_the_first_page_counts_what_is_open(name: str) -> None:
    account, document = work(name).account, work(name).document
    ledger = account.ledger
    assert ledger.spot("record.findings").value == len(account.findings)
    assert ledger.spot("record.open_assumptions").value == sum(
        one.text("state") == "open" for one in account.project.assumptions.values()
    )
    page = section(document, "decision")
    assert any(isinstance(block, SignOff) for block in page.blocks)
    said = " ".join(plain(parts) for parts in texts_of(page))
    assert f"findings {len(account.findings)}" in said


def test_purpose_of_issue_is_told_and_leaves_room_for_a_seal_only_for_record() -> None:
    account = work("demo").account
    for purpose, words in (("checking", "not for construction"), ("approval", "not for construction"), ("record", "")):
        document = pipeline.document(account, purpose)
        assert words in document.status
        assert purpose in document.status
        sign = next(block for block in section(document, "decision").blocks if isinstance(block, SignOff))
        assert sign.seal_area == (purpose == "record")
        assert [role for role, _ in sign.roles] == ["originator", "checker", "approver"]


@EVERY
def test_findings_are_told_together_where_they_say_the_same(name: str) -> None:
    account, document = work(name).account, work(name).document
    rows = table(document, "findings").rows if account.findings else ()
    assert [(plain(row.cells[0]), plain(row.cells[3])) for row in rows] == [
        (alike[0].id, alike[0].text) for alike in gathered(account.findings)
    ]
    told = [plain(row.cells[2]) for row in rows]
    for alike, subject in zip(gathered(account.findings), told, strict=True):
        assert all(finding.subject.partition(".")[2] in subject for finding in alike[:MOST_SUBJECTS])


@EVERY
def test_every_check_is_listed_with_what_came_of_it(name: str) -> None:
    account, document = work(name).account, work(name).document
    rows = {plain(row.cells[0]): plain(row.cells[2]) for row in table(document, "checks").rows}
    assert list(rows) == [check.id for check in CHECKS]
    for check in CHECKS:
        count = sum(finding.id == check.id for finding in account.findings)
        if count:
            assert rows[check.id].startswith(f"{count} found")
        elif check.inputs or check.results:
            assert f"no defect found by check {check.id}" in rows[check.id] or "not made" in rows[check.id]
        else:
            assert "refused when the inputs are read" in rows[check.id]


def test_heads_below_ground_are_marked() -> None:
    document = work("dry").document
    row = row_of(table(document, "junctions-base"), "draw")
    assert row.tone == "flag"
    assert plain(row.cells[3]).startswith("−")
    said = " ".join(plain(parts) for parts in texts_of(section(document, "case-base")))
    assert "The head lies below a junction." in said


@EVERY
def test_headings_differ_from_those_beside_them(name: str) -> None:
    for held in work(name).document.sections:
        headings = [plain(block.parts) for block in held.blocks if isinstance(block, Heading)]
        assert all(first != second for first, second in pairwise(headings))


def test_an_account_can_be_composed_again_and_says_the_same() -> None:
    account = work("loop").account
    first, again = (pipeline.document(account, "checking") for _ in range(2))
    assert first.sections == again.sections
    assert (first.addresses, first.used_by, first.behind) == (again.addresses, again.used_by, again.behind)
