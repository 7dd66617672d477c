"""One look for all figures, held in a context, and figures as bytes that never vary.

Nothing here touches a user's own settings: every figure is made, and written, inside `look`.
"""

from __future__ import annotations

import functools
import io
import re
import warnings
from collections import Counter
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import Any, ParamSpec, TypeVar

import matplotlib as mpl
import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.font_manager import FontProperties
from matplotlib.textpath import text_to_path

from aero.arrays import Floats
from aero.report import palette
from aero.report.names import shorten, visible

# Widths of a report column (160 mm) and of a 16:9 slide [in]; a slide's height is fixed, a column's is not.
WIDTHS = {"column": 160.0 / 25.4, "slide": 8.0}
SLIDE_HEIGHT = 4.5  # in
DPI = 200
SMALL, NORMAL, LARGE = 6.5, 7.5, 9.0  # pt
# The first is shipped with matplotlib, so that sizes are the same on every machine; the second has the
# same widths and is common where SVG text is shown.
FONTS = ["DejaVu Sans", "Verdana"]

_RC = {
    "font.family": ["sans-serif"],
    "font.sans-serif": FONTS,
    "font.size": NORMAL,
    "text.usetex": False,
    "text.parse_math": False,  # a "$" in a name is a dollar sign
    "text.color": palette.INK,
    "svg.fonttype": "none",
    "pdf.fonttype": 42,
    "svg.hashsalt": "aero",
    "axes.linewidth": 0.6,
    "axes.edgecolor": palette.GREY,
    "axes.labelcolor": palette.INK,
    "axes.labelsize": NORMAL,
    "axes.unicode_minus": True,
    "axes.formatter.use_mathtext": False,
    "xtick.color": palette.GREY,
    "ytick.color": palette.GREY,
    "xtick.labelcolor": palette.INK,
    "ytick.labelcolor": palette.INK,
    "xtick.labelsize": NORMAL,
    "ytick.labelsize": NORMAL,
    "xtick.major.width": 0.6,
    "ytick.major.width": 0.6,
    "xtick.major.size": 2.5,
    "ytick.major.size": 2.5,
    "grid.color": palette.FAINT,
    "grid.linewidth": 0.5,
    "hatch.linewidth": 0.5,
    "hatch.color": palette.HATCH_COLOUR,
    "lines.solid_capstyle": "butt",
    "figure.facecolor": palette.PAPER,
    "axes.facecolor": palette.PAPER,
    "savefig.facecolor": "auto",
    "figure.dpi": 100.0,
    "path.simplify": True,
}
# Settings of a program around the figure, not of the figure.
_FOREIGN = (
    "backend",
    "interactive",
    "toolbar",
    "webagg",
    "tk.",
    "docstring",
    "timezone",
    "keymap",
    "animation",
)

# Inside text a ">" and a "<" are always escaped, so this never matches text.
_TAG = re.compile(r"<[^>]*>")
_ID = re.compile(r'(\sid=")([^"]*)(")')

P = ParamSpec("P")
R = TypeVar("R")


@contextmanager
def look() -> Iterator[None]:
    """Hold matplotlib's defaults with our own settings on top, whatever the user has set; then restore."""
    with mpl.rc_context():
        defaults = {k: v for k, v in mpl.rcParamsDefault.items() if not k.startswith(_FOREIGN)}
        with warnings.catch_warnings():  # old settings warn when they are touched, even unchanged
            warnings.simplefilter("ignore")
            mpl.rcParams.update(defaults)
        mpl.rcParams.update(_RC)  # type: ignore[arg-type]
        yield


def styled(draw: Callable[P, R]) -> Callable[P, R]:
    """Run a function that draws inside `look`."""

    @functools.wraps(draw)
    def inside(*args: P.args, **kwargs: P.kwargs) -> R:
        with look():
            return draw(*args, **kwargs)

    return inside


def new_figure(size: str, column_height: float) -> Figure:
    """Return an empty figure for a report column or a slide.

    Parameters
    ----------
    size : str
        A key of `WIDTHS`.
    column_height : float [in]
        Height in a column; a slide has its own.
    """
    if size not in WIDTHS:
        raise ValueError(f"size is {size!r}, expected one of: {', '.join(WIDTHS)}")
    return Figure(figsize=(WIDTHS[size], SLIDE_HEIGHT if size == "slide" else column_height))


def place_axes(
    figure: Figure, left: float, bottom: float, right: float, top: float, **options: object
) -> Axes:
    """Return new axes given their four edges in inches from the left and bottom of the figure."""
    width, height = figure.get_size_inches()
    box = (left / width, bottom / height, max(right - left, 0.1) / width, max(top - bottom, 0.1) / height)
    return figure.add_axes(box, **options)  # type: ignore[call-overload, no-any-return]


def quiet_axes(axes: Axes, *, grid: str = "", keep: tuple[str, ...] = ("left", "bottom")) -> None:
    """Leave only the spines in `keep`, and a faint grid along "x", "y" or "both" behind the data."""
    for name, spine in axes.spines.items():
        spine.set_visible(name in keep)
    axes.set_axisbelow(True)
    if grid:
        axes.grid(True, axis=grid)  # type: ignore[arg-type]


def align_labels(*stack: Axes, reach: float) -> None:
    """Centre the vertical labels of panels under each other, `reach` inches left of the axes."""
    for axes in stack:
        width = axes.bbox.width / axes.get_figure(root=True).dpi  # type: ignore[union-attr]
        axes.yaxis.set_label_coords(-reach / width, 0.5)


def headline(figure: Figure, title: str) -> None:
    """Write the title at the upper left, shortened to the width."""
    width, height = figure.get_size_inches()
    text = fit_text(title, float(width) - 0.2, LARGE, weight="bold")
    figure.text(0.1 / width, 1.0 - 0.09 / height, text, size=LARGE, weight="bold", va="top", gid="title")


def foot(figure: Figure, footer: str) -> None:
    """Write the footer line in small grey at the lower left, shortened to the width."""
    if not footer:
        return
    width, height = figure.get_size_inches()
    text = fit_text(footer, float(width) - 0.2, SMALL - 0.7)
    figure.text(
        0.1 / width, 0.07 / height, text, size=SMALL - 0.7, color=palette.GREY, va="bottom", gid="footer"
    )


def footer_text(
    *, vehicle: str, trajectory: str, atmosphere: str, free_path: str, version: str, digest: str
) -> str:
    """Return the footer of a figure: where it comes from, in one line.

    Examples
    --------
    >>> footer_text(vehicle="Marram", trajectory="steep.csv", atmosphere="standard-1976",
    ...             free_path="hard-sphere", version="0.1.0", digest="3f2a9c1b77d0")
    'Marram  ·  steep.csv  ·  standard-1976  ·  hard-sphere free path  ·  aero 0.1.0  ·  3f2a9c1b'
    """
    parts = (
        shorten(vehicle, 28),
        shorten(trajectory, 36),
        visible(atmosphere),
        f"{visible(free_path)} free path",
        f"aero {visible(version)}",
        visible(digest)[:8],
    )
    return "  ·  ".join(part for part in parts if part)


def dot(*series: Floats) -> dict[str, Any]:
    """Return a marker for a line of one point only, which would not be seen otherwise."""
    alone = np.isfinite(np.stack(series)).all(axis=0).sum() == 1
    return {"marker": "o", "markersize": 3.6} if alone else {}


@functools.lru_cache(maxsize=4096)
def text_width(text: str, size: float, weight: str = "normal") -> float:
    """Return the width of one line of text in the figures' font [in]."""
    font = FontProperties(family=FONTS[0], size=size, weight=weight)
    with _silent_glyphs():
        width, _, _ = text_to_path.get_text_width_height_descent(text, font, False)
    return float(width) / 72.0


def fit_text(text: str, width: float, size: float, weight: str = "normal") -> str:
    """Return the text, cut in the middle until it is no wider than `width` inches."""
    width *= 0.93  # a screen rounds small letters to whole pixels, up to that much wider
    shown = visible(text)
    limit = len(shown)
    while limit > 3 and text_width(shown, size, weight) > width:
        limit = min(limit - 1, int(limit * width / text_width(shown, size, weight)) + 1)
        shown = shorten(text, limit)
    return shown


@contextmanager
def _silent_glyphs() -> Iterator[None]:
    """Keep matplotlib quiet about letters its font lacks: SVG keeps them as text, PNG shows a box."""
    with warnings.catch_warnings():
        warnings.filterwarnings("ignore", message="Glyph .* missing from")
        yield


def svg(figure: Figure) -> str:
    """Return a figure as SVG with text as text; the same figure gives the same characters.

    The document names no date and no program; its element names are made with a fixed salt.
    """
    page = io.StringIO()
    with look(), _silent_glyphs():
        figure.savefig(
            page, format="svg", metadata={"Date": None, "Creator": None, "Type": None, "Format": None}
        )
    return _own_names(re.sub(r"<!DOCTYPE[^>]*>\s*", "", page.getvalue()))


def _own_names(document: str) -> str:
    """Give elements of one name (all pieces of a regime, say) a number each: a name may stand only once."""
    seen: Counter[str] = Counter()

    def number(match: re.Match[str]) -> str:
        seen[match[2]] += 1
        return match[0] if seen[match[2]] == 1 else f"{match[1]}{match[2]}.{seen[match[2]]}{match[3]}"

    return _TAG.sub(lambda tag: _ID.sub(number, tag[0]), document)


def png(figure: Figure) -> bytes:
    """Return a figure as PNG at 200 dpi without metadata that varies."""
    image = io.BytesIO()
    with look(), _silent_glyphs():
        figure.savefig(image, format="png", dpi=DPI, metadata={"Software": None})
    return image.getvalue()


def pdf(figure: Figure) -> bytes:
    """Return a figure as PDF with text as text, without date or program."""
    document = io.BytesIO()
    with look(), _silent_glyphs():
        figure.savefig(
            document, format="pdf", metadata={"CreationDate": None, "Creator": None, "Producer": None}
        )
    return document.getvalue()


FORMATS: dict[str, Callable[[Figure], bytes]] = {
    "svg": lambda figure: svg(figure).encode(),
    "png": png,
    "pdf": pdf,
}


def save_figure(figure: Figure, path: str | Path, kind: str | None = None) -> None:
    """Write a figure to a file.

    Parameters
    ----------
    figure : Figure
    path : path
    kind : str, optional
        A key of `FORMATS`; by default what the name of the file ends in.

    Raises
    ------
    ValueError
        If the kind is not one of them.
    """
    target = Path(path)
    wanted = (kind if kind is not None else target.suffix).lower().lstrip(".")
    if wanted not in FORMATS:
        raise ValueError(f"figure format is {wanted!r}, expected one of: {', '.join(FORMATS)}")
    target.write_bytes(FORMATS[wanted](figure))
