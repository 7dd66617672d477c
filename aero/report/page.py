"""The report as one self-contained page: plain things in, HTML out."""

from __future__ import annotations

import functools
import re
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from typing import TYPE_CHECKING, Any

import numpy as np

from aero.report import palette
from aero.report.columns import ReadyColumn, ready
from aero.report.names import Table, row_count, visible
from aero.report.numbers import split_decimal

if TYPE_CHECKING:
    import jinja2

ROWS = 200  # rows of a table on the page; the files hold all


@dataclass(frozen=True, eq=False)
class Picture:
    """A figure: its SVG (from `style.svg`), a caption, and a description for those who cannot see it."""

    svg: str
    caption: str
    alt: str = ""


@dataclass(frozen=True, eq=False)
class Sheet:
    """A table: the data, a caption, which columns to show, and the file that holds all rows."""

    table: Table
    caption: str
    columns: Sequence[str] | None = None
    file: str = ""


@dataclass(frozen=True, eq=False)
class Section:
    """A heading with its paragraphs, then its pictures, then its tables."""

    title: str
    text: Sequence[str] = ()
    pictures: Sequence[Picture] = ()
    sheets: Sequence[Sheet] = ()


@dataclass(frozen=True)
class Model:
    """A model or an assumption: what it is for, what was taken, where it comes from, and a link if any."""

    what: str
    text: str
    source: str
    link: str = ""


@dataclass(frozen=True, eq=False)
class Page:
    """Everything a report says.

    Attributes
    ----------
    title : str
        Vehicle and trajectory.
    sentence : str
        What anyone can repeat; stands first.
    sections : sequence of Section
        In reading order; sections without content are left out.
    models : sequence of Model
    notes, cautions : sequence of str
    provenance : mapping
        Inputs, hashes, versions, options; may hold mappings and lists.
    facts : mapping
        A few short facts under the sentence, such as the atmosphere: name to text.
    """

    title: str
    sentence: str
    sections: Sequence[Section]
    models: Sequence[Model] = ()
    notes: Sequence[str] = ()
    cautions: Sequence[str] = ()
    provenance: Mapping[str, object] = field(default_factory=dict)
    facts: Mapping[str, str] = field(default_factory=dict)


def render(page: Page) -> str:
    """Return the page as HTML that loads nothing and needs no script.

    Raises
    ------
    ValueError
        If a model's link is not an http or https address.

    Examples
    --------
    >>> html = render(Page("<Marram>", "A sentence.", []))
    >>> "<h1>&lt;Marram&gt;</h1>" in html
    True
    """
    for model in page.models:
        if model.link and not re.match(r"https?://[^\s\"'<>]+\Z", model.link):
            raise ValueError(f"link of model {model.what!r} is {model.link!r}, expected an http(s) address")
    sections = [_section(section) for section in page.sections if _has_content(section)]
    ends = [
        ("Assumptions and models", bool(page.models)),
        ("Notes", bool(page.notes)),
        ("Cautions", bool(page.cautions)),
        ("Provenance", bool(page.provenance)),
    ]
    titles = [section["title"] for section in sections] + [title for title, there in ends if there]
    anchors = dict(zip(range(len(titles)), _anchors(titles), strict=True))
    for number, section in enumerate(sections):
        section["anchor"] = anchors[number]
        section["pictures"] = [
            _picture(picture, f"s{number}p{k}-") for k, picture in enumerate(section.pop("raw_pictures"))
        ]
    contents = [(anchors[k], title) for k, title in enumerate(titles)]
    return _template().render(
        page=page,
        sections=sections,
        contents=contents,
        anchor={title: anchors[len(sections) + k] for k, title in enumerate(titles[len(sections) :])},
        provenance=_flat(page.provenance),
        regimes=[
            {
                "name": r,
                "colour": palette.REGIME_COLOURS[r],
                "text": palette.REGIME_TEXT[r],
                "hatched": r == palette.HATCHED,
            }
            for r in palette.REGIMES
        ],
        hatch=palette.HATCH_COLOUR,
        inks=[(name, light, dark) for light, (name, dark) in palette.PAGE_INKS.items()],
    )


@functools.lru_cache(maxsize=1)
def _template() -> jinja2.Template:
    import jinja2

    environment = jinja2.Environment(
        loader=jinja2.PackageLoader("aero.report", "."),
        autoescape=True,
        undefined=jinja2.StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
        keep_trailing_newline=True,
    )
    environment.filters["visible"] = visible
    return environment.get_template("page.html.j2")


def _has_content(section: Section) -> bool:
    return bool(section.text or section.pictures or section.sheets)


def _section(section: Section) -> dict[str, Any]:
    return {
        "title": visible(section.title),
        "text": [visible(text) for text in section.text],
        "raw_pictures": section.pictures,
        "sheets": [_sheet(sheet) for sheet in section.sheets],
    }


def _anchors(titles: Sequence[str]) -> list[str]:
    """Return an anchor a title, each once.

    Examples
    --------
    >>> _anchors(["The map", "The map!", "Überblick <b>"])
    ['the-map', 'the-map-2', 'berblick-b']
    """
    made: list[str] = []
    for title in titles:
        plain = re.sub(r"[^a-z0-9]+", "-", title.lower()).strip("-") or "section"
        anchor, count = plain, 1
        while anchor in made:
            count += 1
            anchor = f"{plain}-{count}"
        made.append(anchor)
    return made


def _sheet(sheet: Sheet) -> dict[str, Any]:
    count = row_count(sheet.table)
    shown = min(count, ROWS)
    head = {str(name): np.asarray(values)[:shown] for name, values in dict(sheet.table).items()}
    columns = ready(head, sheet.columns, powers=True)
    cells = [_cells(one) for one in columns]
    more = ""
    if count > shown:
        where = f"; all of them in {visible(sheet.file)}" if sheet.file else ""
        more = f"The first {shown} of {count} rows{where}."
    return {
        "caption": visible(sheet.caption),
        "heads": [
            {"title": one.header, "unit": one.unit, "kind": one.kind, "name": one.name} for one in columns
        ],
        "rows": list(zip(*cells, strict=True)),
        "more": more,
        "empty": count == 0,
    }


def _cells(one: ReadyColumn) -> list[dict[str, Any]]:
    """Return cells; a number comes in two parts that meet at its decimal point, and with its full value."""
    cells = one.cells
    if one.kind != "number" or one.values is None:
        return [{"kind": one.kind, "text": cell} for cell in cells]
    parts = [split_decimal(cell) for cell in cells]
    # A power of ten would push the column apart: it stands at the right edge instead.
    room = max((len(rest) for _, rest in parts if "×" not in rest), default=0)
    values = one.values.tolist()
    return [
        {
            "kind": "number",
            "whole": whole.replace("-", "\N{MINUS SIGN}"),
            "rest": rest,
            "room": None if "×" in rest else room,
            "value": "" if value != value else repr(value).removesuffix(".0"),
        }
        for (whole, rest), value in zip(parts, values, strict=True)
    ]


_TAG = re.compile(r"<[^>]*>")
_ID = re.compile(r'(\sid=")([^"]*)(")')
_HREF = re.compile(r'\s(?:xlink:)?href="#([^"]*)"')
_URL = re.compile(r"url\(#([^)]*)\)")


def _picture(picture: Picture, prefix: str) -> dict[str, Any]:
    from markupsafe import Markup

    return {
        # Not escaped again: drawn by this package, its texts were escaped when it was written.
        "svg": Markup(inline_svg(picture.svg, prefix)),
        "caption": visible(picture.caption),
        "alt": visible(picture.alt or picture.caption),
    }


def inline_svg(svg: str, prefix: str) -> str:
    """Return an SVG document fit to stand inside a page.

    Parameters
    ----------
    svg : str
        As `style.svg` returns it.
    prefix : str
        Put before every name in it, so that two figures on a page do not share any.

    Notes
    -----
    Head, namespaces and fixed size go; the inks of figures become the page's variables, so that figures
    follow it into the dark. Text stays as it is: only tags are touched.

    Examples
    --------
    >>> inline_svg('<?xml version="1.0"?><svg width="9pt" viewBox="0 0 9 9"><g id="a"/></svg>', "x-")
    '<svg viewBox="0 0 9 9"><g id="x-a"/></svg>'
    """
    body = svg[svg.index("<svg") :].strip()
    body = re.sub(r"<metadata>.*?</metadata>", "", body, flags=re.DOTALL)
    body = re.sub(
        r"\s*<defs>\s*<style[^>]*>[^<]*</style>\s*</defs>", "", body, count=1
    )  # the page has its own
    body = re.sub(r'^<svg [^>]*?(viewBox="[^"]*")[^>]*>', r"<svg \1>", body)
    return _TAG.sub(lambda tag: _tag(tag.group(), prefix), body)


def _tag(tag: str, prefix: str) -> str:
    tag = _ID.sub(rf"\g<1>{prefix}\g<2>\g<3>", tag)
    tag = _HREF.sub(rf' href="#{prefix}\g<1>"', tag)
    tag = _URL.sub(rf"url(#{prefix}\g<1>)", tag)
    for ink, (name, _) in palette.PAGE_INKS.items():
        tag = tag.replace(f": {ink}", f": var({name})")
    return tag


def _flat(facts: Mapping[str, object], before: str = "") -> list[tuple[str, str]]:
    """Return nested facts as rows.

    Examples
    --------
    >>> _flat({"inputs": {"vehicle": "a.toml"}, "bounds": [0.01, 0.1]})
    [('inputs › vehicle', 'a.toml'), ('bounds', '0.01, 0.1')]
    """
    rows = []
    for name, value in facts.items():
        path = f"{before}{visible(name)}"
        if isinstance(value, Mapping):
            rows += _flat(value, f"{path} › ")
        elif isinstance(value, Sequence) and not isinstance(value, str):
            rows.append((path, ", ".join(visible(one) for one in value)))
        else:
            rows.append((path, "–" if value is None else visible(value)))
    return rows
