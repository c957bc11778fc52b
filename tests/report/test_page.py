"""The page: its structure, its escaping, and its words where numbers are missing."""

from __future__ import annotations

import re
from html.parser import HTMLParser

import pytest

from niche import cautions
from niche.figures import svg_text
from niche.figures.drawing import contrast
from niche.report import write_report
from niche.report.page import page as html_page
from niche.report.record import run_record
from niche.report.rows import closes, reasons_table
from niche.report.writing import report_figures

VOID = {"meta", "br", "img", "link", "hr", "input"}


class Page(HTMLParser):
    """Elements in order, each with its attributes and the text below it; complains about bad nesting."""

    def __init__(self, text: str) -> None:
        super().__init__(convert_charrefs=True)
        self.elements: list[tuple[str, dict[str, str | None], list[str]]] = []
        self.open: list[int] = []
        self.feed(text)
        self.close()
        assert not self.open

    def handle_starttag(self, tag, attrs):
        self.elements.append((tag, dict(attrs), []))
        if tag not in VOID:
            self.open.append(len(self.elements) - 1)

    def handle_startendtag(self, tag, attrs):
        self.elements.append((tag, dict(attrs), []))

    def handle_endtag(self, tag):
        assert self.elements[self.open.pop()][0] == tag, tag

    def handle_data(self, data):
        for place in self.open:
            self.elements[place][2].append(data)

    def all(self, tag, **attributes):
        return [
            (a, " ".join("".join(words).split()))
            for name, a, words in self.elements
            if name == tag and all(a.get(key.rstrip("_")) == value for key, value in attributes.items())
        ]


def written(run):
    figures = {drawing.name: (drawing, svg_text(drawing)) for drawing in report_figures(run)}
    command = "niche report <study> --out 'a & b'"
    record = run_record(run, command=command, created="2026-10-07T08:00:00Z", study_file=None, files=[])
    return html_page(run, figures, record)


@pytest.fixture(scope="module")
def text(plain):
    return written(plain)


@pytest.fixture(scope="module")
def page(text):
    return Page(text)


def words(text):
    """What a reader sees, figures' own descriptions included."""
    bare = re.sub(r"<style.*?</style>", "", text, flags=re.DOTALL)
    return " ".join(re.sub(r"<[^>]*>", " ", bare).split())


def test_structure(page):
    assert page.elements[0][0] == "html"
    assert page.elements[0][1]["lang"] == "en-GB"
    assert len(page.all("h1")) == 1
    assert len(page.all("main")) == 1
    headings = [text for _, text in page.all("h2")]
    assert headings == [
        "Summary",
        "Data and effort",
        "Ledger",
        "Use of zones",
        "Breadth",
        "Overlap",
        "Competition scenario",
        "Assumptions",
        "What more fieldwork would change",
        "Compliance",
        "Run record",
        "References",
    ]
    assert page.all("a", class_="skip")[0][0]["href"] == "#summary"


def test_ids_are_unique_and_links_lead_somewhere(page, plain, tmp_path):
    ids = [a["id"] for _, a, _ in page.elements if a.get("id")]
    assert len(ids) == len(set(ids))
    write_report(plain, tmp_path / "out", command="x")
    for a, words in page.all("a"):
        target = a["href"]
        assert words
        if target.startswith("#"):
            assert target[1:] in ids
        else:
            assert (tmp_path / "out" / target).is_file(), target
    for _, a, _ in page.elements:
        for key in ("aria-labelledby", "aria-describedby"):
            assert set((a.get(key) or "").split()) <= set(ids)


def test_the_page_stands_alone(text, page):
    assert not page.all("script")
    assert not page.all("link")
    assert not page.all("img")
    assert "default-src 'none'" in text
    style = "".join(words for _, words in page.all("style"))
    assert "url(" not in style
    assert "@import" not in style
    addresses = set(re.findall(r"https?://[^\s\"'<]+", text))
    assert addresses <= {"http://www.w3.org/2000/svg", "http://www.w3.org/1999/xlink"}
    assert not re.search(r"\son\w+=", text)


def test_tables_have_captions_headings_and_their_csv(text, page):
    tables = page.all("table")
    assert len(tables) == len(page.all("caption")) >= 12
    assert all(a.get("scope") in ("col", "row") for a, _ in page.all("th"))
    regions = page.all("div", class_="scroll")
    assert len(regions) == len(tables)
    assert all(a["tabindex"] == "0" and a["role"] == "region" and a["aria-labelledby"] for a, _ in regions)
    assert len(re.findall(r'</table>\s*</div>\s*<p class="data"><a href="tables/\w+\.csv">', text)) == len(tables)


def test_figures_have_alternative_text_and_their_data(text, page):
    figures = page.all("svg")
    assert len(figures) == 5
    assert all(a["role"] == "img" for a, _ in figures)
    descriptions = [words for a, words in page.all("desc")]
    assert len(descriptions) == 5
    assert all(re.search(r"\d", words) for words in descriptions)
    assert text.count("Numbers of the figure: table") == 5


def test_numbers_stand_with_their_interval(page, plain):
    e = plain.analysis.overlap["pianka"]
    rows = [text for _, text in page.all("tr")]
    for (s, first), (t, second) in [((0, "dunlin"), (1, "redshank")), ((1, "redshank"), (2, "turnstone"))]:
        row = f"{first}{second}{e.value[s, t]:.2f}{e.low[s, t]:.2f} to {e.high[s, t]:.2f}{e.pooled[s, t]:.2f}"
        assert any(found.startswith(row) for found in rows)


def test_cautions_stand_beside_the_numbers(page):
    asides = [text for _, text in page.all("aside")]
    assert "What this does not show" in asides[0]
    for line in (cautions.OVERLAP, cautions.OUTCOME, cautions.REVIEW, cautions.SCOPE, cautions.COEFFICIENTS):
        assert line in asides[0]
    assert any(cautions.FIELDWORK in text for text in asides)
    assert sum(cautions.OVERLAP in text for text in asides) == 2
    assert sum(cautions.COEFFICIENTS in text for text in asides) == 2


def test_the_note_on_invented_data_comes_first(text):
    assert "Invented data." in words(text)
    assert text.index("Invented data.") < text.index('id="summary"')


def test_the_ledger_closes_in_words(plain, make):
    assert closes(plain).startswith("45 used + 15 out of sight + 0 set aside = 60 rows read; ")
    rows = [["dunlin", "0-0", "x", "the moon", "2026-09-05T08:01:00.950+00:00", "2026-09-05T08:02:00+00:00"]]
    run = make.run({"dunlin": 3}, extra_rows=rows, problems='unknown_zone = "set_aside"')
    assert "9 used + 3 out of sight + 1 set aside = 13 rows read" in closes(run)
    assert "59.05 s set aside" in closes(run)
    found = reasons_table(run)
    assert ("Set aside", "unknown zone", "1", "59.05") in found.rows


def test_the_command_is_shown_as_text(page):
    assert "niche report <study> --out 'a & b'" in [text for _, text in page.all("code")]


def test_compliance_says_when_nothing_is_supplied(page, make):
    assert [text for _, text in page.all("dd")][:3] == ["none supplied"] * 3
    other = Page(written(make.run({"dunlin": 3}, report='permits = "licence 12"\nethics = "board 3"')))
    assert [text for _, text in other.all("dd")][:3] == ["licence 12", "none supplied", "board 3"]


def test_one_species(make):
    text = written(make.run({"dunlin": 4}))
    shown = words(text)
    assert "One species was watched, so there is no overlap." in shown
    assert "so there are no coefficients" in shown
    assert cautions.OUTCOME not in shown
    assert "No availability of zones was given." in shown
    Page(text)


def test_few_animals_and_undefined_numbers_are_words(make):
    run = make.run(
        {"dunlin": 0, "redshank": 2, "turnstone": 4, "ringed plover": 1}, k={"redshank": (1, 2), "turnstone": (1, 2)}
    )
    shown = words(written(run))
    assert "no interval: 2 animals of redshank" in shown
    assert "not defined" in shown
    assert "not defined to" not in shown
    assert not re.search(r"\b(nan|NaN|inf|None)\b", shown)
    assert "There is no outcome: it needs K for both species" in shown


def test_no_k(make):
    shown = words(written(make.run({"dunlin": 3, "redshank": 3})))
    assert "Carrying capacities given" not in shown
    assert "The windows above say for which K both would persist." in shown


def test_one_column_and_one_zone(make):
    shown = words(written(make.run({"dunlin": 3, "redshank": 3}, layout=(("a",), ("b",)))))
    assert not re.search(r"\b(nan|NaN|inf|None)\b", shown)
    shown = words(written(make.run({"dunlin": 3, "redshank": 3}, layout=(("a",),))))
    assert "no interval: no resample gives a value" in shown
    assert not re.search(r"\b(nan|NaN|inf|None)\b", shown)


def test_species_that_share_no_zone_have_a_window_without_limit(make):
    rows = [
        [n, f"{n}{i}", "s", z, f"2026-09-0{i}T08:00:00Z", f"2026-09-0{i}T09:00:00Z"]
        for n, z in (("dunlin", "upper sand"), ("redshank", "upper mud"))
        for i in (1, 2, 3)
    ]
    run = make.run({"dunlin": 0, "redshank": 0}, extra_rows=rows)
    shown = words(written(run))
    assert "no limit" in shown
    assert not re.search(r"\b(nan|NaN|inf|None)\b", shown)


EVIL = ["<b>dunlin</b>", "red\"shank' & co", "</title><script>alert(1)</script>"]


def test_markup_in_names_is_shown_as_written(make):
    run = make.run(
        dict.fromkeys(EVIL, 3),
        layout=(("<i>sand</i>", "{{ 7 * 7 }}"), ("--> mud", "")),
        title="</style><b>title",
        note="<img src=x onerror=alert(1)>",
        k=dict.fromkeys(EVIL, (1, 2)),
        species_lines='scientific_name = "<u>x</u>"',
        report='permits = "<b>p</b>"',
    )
    text = written(run)
    page = Page(text)
    assert not page.all("script")
    assert not page.all("b")
    assert not page.all("u")
    assert not page.all("img")
    assert page.all("h1")[0][1] == "</style><b>title"
    for name in EVIL:
        assert any(found.startswith(name) for _, found in page.all("th", scope="row"))
    assert "{{ 7 * 7 }}" in words(text).replace("&lt;", "<")
    assert page.all("i", lang="la")[0][1] == "<u>x</u>"


def test_names_of_any_script(make):
    names = ["イソシギ", "كروان", "Бекас"]
    page = Page(written(make.run(dict.fromkeys(names, 3), layout=(("上の砂", "شاطئ"),), title="干潟")))
    assert page.all("h1")[0][1] == "干潟"
    headings = [text for _, text in page.all("th", scope="col")]
    assert {"イソシギ", "\u2068كروان\u2069", "Бекас"} <= set(headings)
    assert any(text.startswith("イソシギ and \u2068كروان\u2069:") for _, text in page.all("li"))


def test_colours_of_both_schemes_are_readable(page):
    style = "".join(words for _, words in page.all("style"))
    schemes = re.findall(r":root \{(.*?)\}", style, flags=re.DOTALL)[:2]
    light = dict(re.findall(r"--(\w+): (#\w+)", schemes[0]))
    dark = light | dict(re.findall(r"--(\w+): (#\w+)", schemes[1]))
    assert light != dark
    for scheme in (light, dark):
        for ground in ("paper", "panel"):
            for ink in ("ink", "soft", "link"):
                assert contrast(scheme[ink], scheme[ground]) >= 4.5, (ink, ground)
            assert contrast(scheme["mark"], scheme[ground]) >= 3
    assert dark["plate"] == "#ffffff"
