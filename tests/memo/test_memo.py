"""The memo: what a reviewer must find in it; of the demo, an unsolved, an empty station."""

import re
from html.parser import HTMLParser

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from server import __version__
from server.memo.blocks import Number
from server.memo.book import SECTIONS, memo_book
from server.memo.notes import NOTE_SECTIONS
from server.memo.sections.cautions import CAUTIONS
from server.memo.source import memo_source
from server.memo.to_html import css_string, memo_html, page_css
from server.station import fields, paths
from server.station.canonical import canonical_bytes, document_hash
from server.station.station import Answer, MemoNote, Station
from server.studies.assess import assess
from server.studies.findings.answers import answer_key
from server.units import from_si


def changed(station, **parts):
    return station.model_copy(update=parts)


def test_the_first_section_says_that_the_set_does_not_hold_and_why(memo, words):
    first = words(memo)[: words(memo).index("The job and the basis of design")]

    assert "does not hold" in first
    assert "119.3 kPa at the connection" in first
    assert "33 % of its best-efficiency flow" in first
    assert "2039, supplying main" in first


def test_sections_are_numbered_in_order(memo):
    numbers = [int(n) for n in re.findall(r'<h2 id="section-(\d+)">', memo)]

    assert numbers == list(range(1, len(SECTIONS) + 1))


def test_all_twelve_cautions_stand_in_every_memo(memo, words):
    for text in (words(memo), words(memo_html(Station(), "si", "a4"))):
        assert len(CAUTIONS) == 12
        assert all(caution in text for caution in CAUTIONS)


def test_the_record_names_program_method_and_document(memo, words, demo):
    text = words(memo)

    assert f"Firmhead {__version__}" in text
    assert document_hash(canonical_bytes(demo)) in text
    assert "study “duty”, version" in text


def test_a_note_stands_at_the_end_of_its_section_and_one_without_in_the_record(demo, words):
    notes = (
        MemoNote(id="mn-aaaaaa", section="basis", text="Basis note."),
        MemoNote(id="mn-bbbbbb", text="Plain note."),
        MemoNote(id="mn-cccccc", section="of a later program", text="Strange note."),
    )
    text = words(
        memo_html(changed(demo, memo=demo.memo.model_copy(update={"notes": notes})), "si", "a4")
    )

    assert (
        text.index("Never checked")
        > text.index("Inputs and their sources")
        > text.index("Basis note.")
        > text.index("The job and the basis of design")
    )
    assert text.index("Strange note.") > text.index("Plain note.") > text.index("SHA-256")


def test_every_section_that_takes_a_note_is_a_section_of_the_memo():
    assert {key for key, _ in NOTE_SECTIONS if key} == {n for n, _ in SECTIONS} - {"record"}


def test_every_default_is_listed(memo, words, demo):
    defaults = [f for f in assess(demo).findings if f.code == "default_used"]

    assert defaults
    assert words(memo).count("a default stands in") == len(defaults)


def test_a_value_whose_source_is_a_default_is_marked(demo, words):
    altitude = demo.site.altitude.model_copy(
        update={"source": demo.site.altitude.source.model_copy(update={"kind": "default"})}
    )
    marked = changed(demo, site=changed(demo.site, altitude=altitude))

    assert "Altitude above sea level 110 m DEFAULT" in words(memo_html(marked, "si", "a4"))


def test_what_was_not_checked_stands_with_the_fields_it_needs(memo, words):
    text = words(memo)
    section = text[text.index("What was not checked", text.index("Findings in full")) :]

    assert "Supplying zone not checked" in section
    assert "loss in the supplying zone" in section
    assert "Transients: power failure" in section


def test_every_finding_stands_in_the_memo(memo, words, demo):
    from server.studies.findings.words import sentence

    text = words(memo)
    for finding in assess(demo).findings:
        assert " ".join(sentence(finding, demo, "si").replace("\u00a0", " ").split()) in text


def test_an_answer_stands_beside_its_finding_and_hides_nothing(demo, words):
    finding = assess(demo).findings[0]
    answer = Answer(id="an-000001", finding=answer_key(finding), text="Storage is studied.")
    text = words(memo_html(changed(demo, answers=(answer,)), "si", "a4"))

    assert "Answer: Storage is studied." in text
    assert "does not hold" in text[:1500]


def test_an_answer_to_a_finding_that_is_gone_is_said_to_be_so(demo, words):
    answer = Answer(id="an-000001", finding="gone /nowhere", text="An old answer.")

    assert "Answers whose finding no longer stands: An old answer." in words(
        memo_html(changed(demo, answers=(answer,)), "si", "a4")
    )


def test_a_departure_stands_with_both_limits_and_its_reason(demo, words):
    from server.station.entry import Quantity
    from server.station.station import Criteria, CriteriaRow

    row = CriteriaRow(
        id="suction-gauge-minimum",
        limit=Quantity(value=120, unit="kPa"),
        reason="Agreed in writing.",
    )
    text = words(memo_html(changed(demo, criteria=Criteria(rows=(row,))), "si", "a4"))

    assert re.search(r"Station suction gauge 140 kPa 120 kPa .*Agreed in writing\.", text)


class _Data(HTMLParser):
    """Reads every number that carries its unit."""

    def __init__(self, text):
        super().__init__()
        self.numbers = []
        self.feed(text)

    def handle_starttag(self, tag, attrs):
        if tag == "data":
            self.numbers.append((dict(attrs)["value"], dict(attrs)["data-unit"]))


def _flow_of(page, scenario):
    row = re.search(
        rf'<th scope="row">{scenario}</th>.*?</tr>',
        page[page.index("Duty by scenario") :],
        re.S,
    )
    return _Data(row.group(0)).numbers[0]


def test_the_same_number_is_read_back_from_both_views(demo, memo):
    si = _flow_of(memo, "Peak hour, design")
    us = _flow_of(memo_html(demo, "us", "letter"), "Peak hour, design")

    assert si == ("36.0", "L/s")
    assert us == (f"{from_si(0.036, 'gpm_us'):.0f}", "gpm_us")


@pytest.mark.parametrize("view", ["si", "us"])
def test_no_number_is_bare_or_missing_without_a_dash(demo, view, words):
    text = words(memo_html(demo, view, "a4"))

    text = text.replace("9.80665 m/s²", "")

    assert not re.search(r"\bnan\b|\binf\b|None|\d\.\d{5,}", text)


def test_the_us_view_has_no_si_result(demo, words):
    text = words(memo_html(demo, "us", "letter"))
    results = text[text.index("Duty by scenario") : text.index("Findings in full")]

    assert not re.search(r"\d kPa|\d L/s|\d m\b", results)


def test_one_file_needs_no_other(memo):
    assert "<link" not in memo
    assert "<script" not in memo
    assert "<style>" in memo
    assert not re.search(r'(src|href)="(?!#)', memo)


def test_figures_are_vectors_with_captions(memo):
    figures = re.findall(r"<figure>.*?</figure>", memo, re.S)

    assert len(figures) == 3
    assert all("<svg" in figure and "<figcaption>Figure" in figure for figure in figures)
    assert "<img" not in memo


def test_no_text_of_a_station_becomes_markup(demo):
    evil = changed(
        demo,
        identity=changed(demo.identity, title="<script>alert(1)</script>", purpose="<b>x</b>"),
    )
    page = memo_html(evil, "si", "a4")

    assert "<script>" not in page
    assert "&lt;b&gt;x&lt;/b&gt;" in page


def test_a_title_cannot_leave_the_running_line():
    text = css_string('A"; } body { display: none } \\ </style> ü')

    assert text.count('"') == 2
    assert "}" not in text
    assert "<" not in text
    assert "ü" in text


@pytest.mark.parametrize(("paper", "size"), [("a4", "A4"), ("letter", "letter")])
def test_the_paper_carries_page_numbers_and_the_station(demo, paper, size):
    book = memo_book(demo, assess(demo), "si")
    css = page_css(book.head, paper)

    assert f"size:{size};" in css
    assert 'counter(page) " of " counter(pages)' in css
    assert '"Upper Fold booster · Draft"' in css


def test_an_empty_station_has_a_memo_that_names_what_is_missing(words):
    text = words(memo_html(Station(), "si", "a4"))

    assert "No set is proposed yet" in text
    assert "Site and supply, kind of supply" in text
    assert "Nothing is entered yet." in text


def test_an_unsolved_set_names_on_page_one_what_stands_in_its_way(demo, words):
    main = demo.discharge_main.reaches[0].model_copy(update={"bore": None})
    reaches = (main, *demo.discharge_main.reaches[1:])
    unsolved = changed(demo, discharge_main=changed(demo.discharge_main, reaches=reaches))
    text = words(memo_html(unsolved, "si", "a4"))
    first = text[: text.index("The job and the basis of design")]

    assert "Not solved" in first
    assert "Station to Fold Lane, bore" in first
    assert "Not computed: the proposed set is not solved." in text


@pytest.mark.parametrize("kind", ["tank", "grade_line"])
def test_a_kind_of_supply_that_is_not_computed_still_has_a_memo(demo, kind, words):
    other = changed(demo, supply=changed(demo.supply, kind=kind))

    assert "What is proposed" in words(memo_html(other, "si", "a4"))


@pytest.mark.parametrize("section", [s for _, s in SECTIONS], ids=[n for n, _ in SECTIONS])
def test_every_section_begins_with_its_heading_for_any_station(section, demo):
    for station in (Station(), demo):
        first = section(memo_source(station, assess(station), "si"))[0]

        assert type(first).__name__ == "Heading"
        assert first.level == 2


def test_a_number_of_a_memo_is_kept_in_si(demo):
    book = memo_book(demo, assess(demo), "us")
    tables = [b for b in book.blocks if type(b).__name__ == "Table"]
    duty = next(t for t in tables if t.caption.startswith("Duty by scenario"))

    assert duty.rows[7][2] == pytest.approx(0.036)
    assert Number(0.036, duty.columns[2].dimension).value == 0.036


def _entered(station, path):
    node, value = fields.node_at(path), paths.get(station, path)
    if node.kind == "group":
        for name in node.children:
            yield from _entered(station, f"{path}/{name}")
    elif node.kind == "list":
        for item in value:
            yield from _entered(station, f"{path}/{item.id}")
    elif node.kind == "quantity" and value is not None:
        yield path


@settings(
    max_examples=12, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture]
)
@given(data=st.data())
def test_a_memo_is_written_whatever_single_value_is_missing(demo, words, data):
    parts = (
        "/site",
        "/supply",
        "/legs",
        "/discharge_main",
        "/zone",
        "/horizons",
        "/pumps",
        "/sets",
    )
    path = data.draw(st.sampled_from([p for part in parts for p in _entered(demo, part)]))
    text = words(memo_html(paths.put(demo, path, None), "si", "a4"))

    assert "Cautions" in text
    assert not re.search(r"\bnan\b|\binf\b", text)
