"""The main job: one pass from a trajectory file to tables, figures and a report.

Importing the room loads no table or figure library: `aero point` needs neither.
"""

from __future__ import annotations

import importlib
from typing import TYPE_CHECKING

from aero.callable_module import make_callable

if TYPE_CHECKING:
    from aero.survey.one_pass import Survey, survey
    from aero.survey.one_point import point
    from aero.survey.settings import Settings

_HOME = {"Settings": "settings", "Survey": "one_pass", "point": "one_point", "survey": "one_pass"}
__all__ = ["Settings", "Survey", "point", "survey"]


def __getattr__(name: str) -> object:
    if name not in _HOME:
        raise AttributeError(f"module 'aero.survey' has no attribute '{name}'")
    return getattr(importlib.import_module(f"aero.survey.{_HOME[name]}"), name)


make_callable(__name__)
