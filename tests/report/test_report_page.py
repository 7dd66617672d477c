"""The report page: whole, escaped, self-contained, its numbers those of the data."""

from __future__ import annotations

import re
from html.parser import HTMLParser
from types import SimpleNamespace

import numpy as np
import pytest

from aero.report import Model, Page, Picture, Section, Sheet, figure_map, figure_strips, render, svg
from aero.report.page import inline_svg

NASTY = '<script>alert(1)</script> & "x" \'y\' {{ 7 * 7 }} $z$ id="q" \x00'
VOID = {"meta", "br", "hr", "img", "input", "link"}


class Reader(HTMLParser):
    """Collects what a browser would see; fails on tags that do not close in order."""

    def __init__(self, html: str) -> None:
        super().__init__(convert_charrefs=True)
        self.tags: list[tuple[str, dict[str, str | None]]] = []
        self.open: list[str] = []
        self.words: list[str] = []
        self.feed(html)
        self.close()

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.tags.append((tag, dict(attrs)))
        if tag not in VOID:
            self.open.append(tag)

    def handle_startendtag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.tags.append((tag, dict(attrs)))

    def handle_endtag(self, tag: str) -> None:
        assert self.open.pop() == tag

    def handle_data(self, data: str) -> None:
        if self.open and self.open[-1] not in {"style"}:
            self.words.append(data.strip())


@pytest.fixture(scope="module")
def page(capsule: SimpleNamespace) -> str:
    strips = svg(figure_strips(capsule.points, capsule.segments, bounds=capsule.bounds, footer=NASTY))
    chart = svg(figure_map(capsule.points, capsule.crossings, bounds=capsule.bounds, footer=NASTY))
    segments = capsule.segments.copy()
    segments.loc[0, "method"] = NASTY
    return render(
        Page(
            title=f"Marram {NASTY}",
            sentence=f"It leaves free-molecular flow at 129.0 km. {NASTY}",
            facts={NASTY: NASTY},
            sections=[
                Section("Regimes", [NASTY], [Picture(strips, NASTY), Picture(chart, NASTY)]),
                Section("Segments", sheets=[Sheet(segments, NASTY, file="segments.csv")]),
                Section("Nothing"),
                Section("Points", sheets=[Sheet(capsule.points, "Points", file="points.csv")]),
                Section(f"Notes {NASTY}", ["text"]),
            ],
            models=[
                Model(NASTY, NASTY, NASTY),
                Model("Air", "1976", "NOAA", "https://ntrs.nasa.gov/x?a=1&b=2"),
            ],
            notes=[NASTY],
            cautions=["Screening results.", NASTY],
            provenance={"inputs": {"file": NASTY, "bounds": [0.01, 0.1, 10.0]}, "none": None},
        )
    )


def test_every_name_is_text_and_never_markup(page: str) -> None:
    seen = Reader(page)
    assert not seen.open
    assert "script" not in {tag for tag, _ in seen.tags}
    assert "<script" not in page.lower()
    assert "49" not in " ".join(w for w in seen.words if "Marram" in w)  # no template is run inside a name
    assert sum("<script>alert(1)</script>" in word for word in seen.words) >= 12
    assert "\x00" not in page
    assert not any(name.startswith("on") for _, attributes in seen.tags for name in attributes)


def test_nothing_is_loaded_from_anywhere(page: str) -> None:
    for tag, attributes in Reader(page).tags:
        assert tag not in {"link", "img", "iframe", "object", "embed", "base"}
        assert not {"src", "srcset", "data", "action", "poster"} & set(attributes) or tag == "data"
        target = attributes.get("href")
        if target is not None and not target.startswith("#"):
            assert tag == "a"
            assert target.startswith("https://")
    assert "@import" not in page
    assert all(place.startswith("#") for place in re.findall(r"url\(([^)]*)\)", page))
    assert "xmlns" not in page


def test_anchors_meet_and_no_name_is_given_twice(page: str) -> None:
    tags = Reader(page).tags
    names = [attributes["id"] for _, attributes in tags if "id" in attributes]
    assert len(names) == len(set(names))
    wanted = {str(a["href"])[1:] for _, a in tags if str(a.get("href", "")).startswith("#")}
    wanted |= set(re.findall(r"url\(#([^)]*)\)", page))
    assert wanted <= set(names)
    assert len([a for t, a in tags if t == "h2"]) == 8


def test_the_sentence_stands_first_and_the_contents_name_every_heading(page: str) -> None:
    seen = Reader(page)
    words = [word for word in seen.words if word]
    assert next(k for k, w in enumerate(words) if w.startswith("It leaves")) < words.index("Regimes")
    order = [
        page.index(f'id="{a}"') for a in ("regimes", "segments", "points", "assumptions-and-models", "notes")
    ]
    assert order == sorted(order)
    assert "Nothing" not in words  # a section without content is left out
    assert page.index("Before use:") < page.index("<main>")
    assert page.index('class="cautions"') < page.index('id="provenance"')


def test_numbers_in_the_page_are_those_of_the_tables(page: str, capsule: SimpleNamespace) -> None:
    body = page[page.index('id="segments"') : page.index('id="points"')]
    rows = re.findall(r"<tr>(.*?)</tr>", body, re.DOTALL)[1:]
    assert len(rows) == len(capsule.segments)
    numbers = capsule.segments.select_dtypes("number")
    for row, (_, wanted) in zip(rows, numbers.iterrows(), strict=True):
        exact = [float(v) for v in re.findall(r'<data value="([^"]*)">', row)]
        np.testing.assert_array_equal(exact, wanted.to_numpy())


def test_units_are_spelt_for_people_and_stand_in_headers(page: str) -> None:
    heads = re.findall(r"<th scope=\"col\"[^>]*>(.*?)</th>", page)
    assert any("[MJ/m²]" in head for head in heads)
    assert any("[kW/m²]" in head or "[MW/m²]" in head for head in heads)
    assert "W_m2" not in "".join(heads)
    assert not re.findall(r"<td[^>]*>[^<]*W/m²", page)


def test_regimes_are_tinted_from_the_one_scale(page: str) -> None:
    assert '<td class="regime"><span class="r-slip">slip</span></td>' in page
    assert ".r-slip { background: #3a7d8c; color: #fdfdfb; }" in page


def test_long_tables_say_how_much_they_show(page: str, capsule: SimpleNamespace) -> None:
    assert f"The first 200 of {len(capsule.points)} rows; all of them in points.csv." in page


def test_an_empty_table_says_none(capsule: SimpleNamespace) -> None:
    html = render(
        Page("t", "s", [Section("Crossings", sheets=[Sheet(capsule.crossings.iloc[:0], "Bounds met")])])
    )
    assert "Bounds met: none." in html


def test_the_page_follows_the_readers_system_and_prints_on_paper(page: str) -> None:
    assert "@media screen and (prefers-color-scheme: dark)" in page
    assert re.search(r"@page \{ size: A4", page)
    figures = re.findall(r"<svg .*?</svg>", page, re.DOTALL)
    assert len(figures) == 2
    for figure in figures:
        assert "var(--ink)" in figure
        assert "#1b2733" not in re.sub(r">[^<]*<", "><", figure)
        assert 'width="' not in figure.split(">", 1)[0]


def test_the_same_page_twice_is_the_same_text() -> None:
    one = Page("t", "s", [Section("A", ["b"])], provenance={"x": 1})
    assert render(one) == render(one)


def test_inlining_leaves_text_alone() -> None:
    made = inline_svg('<svg viewBox="0 0 1 1"><g id="a"><text>id="a" #1b2733 url(#a)</text></g></svg>', "p-")
    assert made == '<svg viewBox="0 0 1 1"><g id="p-a"><text>id="a" #1b2733 url(#a)</text></g></svg>'


@pytest.mark.parametrize("link", ["javascript:alert(1)", "//x.org", 'https://x.org/"onclick=', "file:///etc"])
def test_only_web_addresses_are_linked(link: str) -> None:
    with pytest.raises(ValueError, match="expected an http"):
        render(Page("t", "s", [], models=[Model("a", "b", "c", link)]))


def test_the_rooms_public_names() -> None:
    import aero.report as room

    assert set(room.__all__) == {
        *("Model", "Page", "Picture", "Section", "Sheet", "render"),
        *("figure_air", "figure_coefficients", "figure_heating", "figure_map", "figure_strips"),
        *("footer_text", "png", "save_figure", "svg", "why_no_heating"),
        *("SEGMENT_COLUMNS", "facts_text", "table_text", "terminal_tables"),
        *("format_number", "format_quantity", "percent"),
    }
    assert all(callable(getattr(room, name)) or name == "SEGMENT_COLUMNS" for name in room.__all__)
    with pytest.raises(AttributeError, match="no attribute 'figure_pie'"):
        room.figure_pie  # noqa: B018


def test_what_is_wider_than_a_narrow_window_moves_in_its_own_box(page: str) -> None:
    """No table or drawing stands outside a box that scrolls, and every box can be reached without a mouse."""
    boxes: list[str] = []
    inside: dict[str, list[bool]] = {"table": [], "svg": []}

    class Boxes(HTMLParser):
        def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
            found = dict(attrs)
            if tag == "div":
                boxes.append(str(found.get("class")))
                if boxes[-1] in {"wide", "draw"}:
                    assert found.get("tabindex") == "0"
            elif tag in inside:
                inside[tag].append({"table": "wide", "svg": "draw"}[tag] in boxes)

        def handle_endtag(self, tag: str) -> None:
            if tag == "div":
                boxes.pop()

    Boxes().feed(page)
    assert len(inside["table"]) == 4
    assert len(inside["svg"]) == 2
    assert all(inside["table"] + inside["svg"])
    assert re.search(r"\.wide \{ overflow-x: auto;", page)
    assert page.count("nothing is cut") == 4  # at two tables of data and two figures


def test_segments_show_how_low_and_how_high_each_went(capsule: SimpleNamespace) -> None:
    from aero.report import SEGMENT_COLUMNS
    from aero.report.columns import ready

    segments = capsule.segments.assign(altitude_min_m=80e3, altitude_max_m=130e3)
    titles = [one.title for one in ready(segments, SEGMENT_COLUMNS)]
    assert titles[2:8] == ["start [s]", "end [s]", "from [km]", "to [km]", "lowest [km]", "highest [km]"]
