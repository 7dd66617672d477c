"""Plain tables in; figures, text tables and pages out. Nothing here prints or knows a result object.

Names are imported when first used: a text table needs neither matplotlib nor the page's templates.
"""

from __future__ import annotations

import importlib
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from aero.report.air import figure_air as figure_air
    from aero.report.coefficients import figure_coefficients as figure_coefficients
    from aero.report.columns import SEGMENT_COLUMNS as SEGMENT_COLUMNS
    from aero.report.heating import figure_heating as figure_heating
    from aero.report.heating import why_no_heating as why_no_heating
    from aero.report.map import figure_map as figure_map
    from aero.report.numbers import format_number as format_number
    from aero.report.numbers import format_quantity as format_quantity
    from aero.report.page import Model as Model
    from aero.report.page import Page as Page
    from aero.report.page import Picture as Picture
    from aero.report.page import Section as Section
    from aero.report.page import Sheet as Sheet
    from aero.report.page import render as render
    from aero.report.pieces import percent as percent
    from aero.report.strips import figure_strips as figure_strips
    from aero.report.style import footer_text as footer_text
    from aero.report.style import png as png
    from aero.report.style import save_figure as save_figure
    from aero.report.style import svg as svg
    from aero.report.table import facts_text as facts_text
    from aero.report.table import table_text as table_text
    from aero.report.table import terminal_tables as terminal_tables

_HOMES = {
    "SEGMENT_COLUMNS": "columns",
    "Model": "page",
    "Page": "page",
    "Picture": "page",
    "Section": "page",
    "Sheet": "page",
    "facts_text": "table",
    "figure_air": "air",
    "figure_coefficients": "coefficients",
    "figure_heating": "heating",
    "figure_map": "map",
    "figure_strips": "strips",
    "footer_text": "style",
    "format_number": "numbers",
    "format_quantity": "numbers",
    "percent": "pieces",
    "png": "style",
    "render": "page",
    "save_figure": "style",
    "svg": "style",
    "table_text": "table",
    "terminal_tables": "table",
    "why_no_heating": "heating",
}
__all__ = list(_HOMES)


def __getattr__(name: str) -> object:
    if name in _HOMES:
        return getattr(importlib.import_module(f"aero.report.{_HOMES[name]}"), name)
    raise AttributeError(f"module 'aero.report' has no attribute {name!r}")
