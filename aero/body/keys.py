"""Reading a TOML table key by key, so that every mistake is named with its line, value and remedy."""

from __future__ import annotations

import math
import re
from collections.abc import Iterable
from typing import Any, NoReturn

from aero.errors import InputError, nearest
from aero.units import article, quantity, split_header, to_si

Vector = tuple[float, float, float]


class Table:
    """One table of a TOML file and where it stands.

    Parameters
    ----------
    data : dict
    source : str
        File name for messages.
    text : str
        The whole file, searched for line numbers.
    path : str, optional
        Dotted name of the table; empty for the top level.

    Notes
    -----
    Keys are known once they were asked for; `finish` then names what is left over. A key may end in its
    unit (`mass_kg = 38`), otherwise its value is text with a unit (`mass = "38 kg"`).
    """

    def __init__(self, data: dict[str, Any], source: str, text: str, path: str = "") -> None:
        self.data = data
        self.source = source
        self.text = text
        self.path = path
        self._known: list[str] = []
        self._used: set[str] = set()

    def fail(self, key: str, problem: str, remedy: str | None = None) -> NoReturn:
        """Raise the error for a key of this table."""
        name = self._name(key)
        raise InputError(f"key '{name}' {problem}", source=self.source, line=self._line(key), remedy=remedy)

    def value(self, key: str, *, required: bool = False, example: str = "") -> Any:
        """Return a raw value, None when it is absent."""
        self._known.append(key)
        if key in self.data:
            self._used.add(key)
            return self.data[key]
        if required:
            self._missing(key, example)
        return None

    def table(self, key: str, *, required: bool = False) -> Table | None:
        """Return a table inside this one, None when it is absent."""
        found = self.value(key, required=required)
        if found is None:
            return None
        if not isinstance(found, dict):
            self.fail(key, f"is '{found}', expected a table", f"write it as [{self._name(key)}]")
        return Table(found, self.source, self.text, self._name(key))

    def tables(self, key: str) -> list[Table]:
        """Return the tables of a list of them ([[key]] in the file), named key[1], key[2], ..."""
        found = self.value(key)
        if found is None:
            return []
        if not isinstance(found, list) or not all(isinstance(one, dict) for one in found):
            self.fail(key, f"is '{found}', expected tables", f"write each as [[{self._name(key)}]]")
        return [
            Table(one, self.source, self.text, f"{self._name(key)}[{number}]")
            for number, one in enumerate(found, start=1)
        ]

    def point(self, key: str, dimension: str | None, *, required: bool = False) -> Vector | None:
        """Return three numbers, each with a unit of `dimension` (SI) or plain where it is None."""
        found = self.value(key, required=required)
        if found is None:
            return None
        example = "[0, 1, 0]" if dimension is None else '["0.1 m", "0 m", "-5 cm"]'
        if not isinstance(found, list) or len(found) != 3:
            self.fail(key, f"is '{found}', expected three values (x, y, z)", f"write {key} = {example}")
        numbers = []
        for value in found:
            if dimension is not None:
                numbers.append(self._in_si(key, key, value, dimension, ()))
            elif isinstance(value, bool) or not isinstance(value, (int, float)) or not math.isfinite(value):
                self.fail(key, f"holds '{value}', expected a number", f"write {key} = {example}")
            else:
                numbers.append(float(value))
        return numbers[0], numbers[1], numbers[2]

    def switch(self, key: str) -> bool | None:
        """Return true or false, None when absent."""
        found = self.value(key)
        if found is not None and not isinstance(found, bool):
            self.fail(key, f"is '{found}', expected true or false", "write it without quotes")
        return found

    def quantity(
        self,
        key: str,
        dimension: str,
        *,
        required: bool = False,
        positive: bool = True,
        example: str = "",
        words: tuple[str, ...] = (),
    ) -> float | str | None:
        """Return a dimensional value in SI, one of `words` as it stands, or None when absent."""
        actual = self._with_suffix(key, dimension)
        found = self.data.get(actual)
        if found is None:
            if required:
                self._missing(key, example)
            return None
        if found in words:
            return str(found)
        value = self._in_si(actual, key, found, dimension, words)
        if positive and not value > 0.0:
            self.fail(actual, f"is '{found}', expected more than 0")
        return value

    def number(
        self, key: str, low: float, high: float, *, words: tuple[str, ...] = (), open_low: bool = False
    ) -> float | str | None:
        """Return a plain number within bounds, one of `words`, or None when absent."""
        found = self.value(key)
        if found is None or (isinstance(found, str) and found in words):
            return found
        wanted = f"a number {'above' if open_low else 'from'} {low:g}"
        wanted += (
            f" {'up ' if open_low else ''}to {high:g}" if math.isfinite(high) else " up" * (not open_low)
        )
        wanted += "".join(f" or '{word}'" for word in words)
        if isinstance(found, bool) or not isinstance(found, (int, float)):
            guess = nearest(found, words) if isinstance(found, str) else None
            self.fail(key, f"is '{found}', expected {wanted}", guess or "write it without quotes or unit")
        if not (low <= found <= high) or (open_low and found == low):
            self.fail(key, f"is {found:g}, expected {wanted}")
        return float(found)

    def string(self, key: str, *, required: bool = False, example: str = "") -> str | None:
        """Return a text, None when absent."""
        found = self.value(key, required=required, example=example)
        if found is None:
            return None
        if not isinstance(found, str) or not found:
            self.fail(key, f"is '{found}', expected text", "write it in quotes")
        return found

    def choice(
        self, key: str, allowed: Iterable[str], *, required: bool = False, example: str = ""
    ) -> str | None:
        """Return one of `allowed`, None when absent."""
        found = self.string(key, required=required, example=example)
        names = list(allowed)
        if found is not None and found not in names:
            self.fail(key, f"is '{found}', expected one of: {', '.join(names)}", nearest(found, names))
        return found

    def finish(self) -> None:
        """Raise an error for the first key that nobody asked for, naming the nearest known one."""
        for key in self.data:
            if key not in self._used:
                what = "table" if _is_table(self.data[key]) else "key"
                known = ", ".join(self._known)
                raise InputError(
                    f"unknown {what} '{self._name(key)}', expected one of: {known}",
                    source=self.source,
                    line=self._line(key),
                    remedy=nearest(key, self._known) or "remove it",
                )

    def _in_si(self, actual: str, key: str, found: Any, dimension: str, words: tuple[str, ...]) -> float:
        if isinstance(found, bool) or not isinstance(found, (str, int, float)):
            self.fail(actual, f"holds '{found}', expected {article(dimension)} as text such as in the guide")
        try:
            if actual != key and not isinstance(found, str):
                unit = split_header(actual).unit or ""
                value = to_si(float(found), unit, dimension)
            else:
                value = quantity(found, dimension, column=key)
        except InputError as error:
            also = f", or write {' or '.join(repr(word) for word in words)}" if words else ""
            problem = error.problem if error.problem.startswith("holds") else f"holds {error.problem}"
            self.fail(actual, problem, f"{error.remedy}{also}" if error.remedy else None)
        if not math.isfinite(value):
            self.fail(actual, f"holds '{found}', expected a finite {dimension}")
        return value

    def _with_suffix(self, key: str, dimension: str) -> str:
        """Return the key as written: itself or with a unit behind it; both at once is an error."""
        self._known.append(key)
        found = [name for name in self.data if name == key or self._is_suffixed(name, key)]
        self._used.update(found)
        if len(found) > 1:
            self.fail(found[1], f"gives the {dimension} '{key}' a second time", "keep one of them")
        return found[0] if found else key

    @staticmethod
    def _is_suffixed(name: str, key: str) -> bool:
        header = split_header(name)
        return (
            name.startswith(f"{key}_")
            and header.unit is not None
            and header.meaning == split_header(key).meaning
        )

    def _missing(self, key: str, example: str = "") -> NoReturn:
        present = [name for name in self.data if name not in self._used]
        guess = nearest(key, present)
        near = f"is '{guess.split(chr(39))[1]}' meant for it?" if guess else None
        remedy = near or (f"add {key} = {example}" if example else f"add {key}")
        where = f"[{self.path}] " if self.path else ""
        line = None if not self.path else self._header_line()
        raise InputError(f"{where}key '{key}' is missing", source=self.source, line=line, remedy=remedy)

    def _name(self, key: str) -> str:
        return f"{self.path}.{key}" if self.path else key

    def _line(self, key: str) -> int | None:
        wanted, current = self._name(key), ""
        counted: dict[str, int] = {}
        for number, line in enumerate(self.text.splitlines(), start=1):
            header = re.match(r"\s*(\[+)\s*([^\]]+?)\s*\]+", line)
            if header:
                current = header.group(2).replace('"', "")
                if header.group(1) == "[[":
                    counted[current] = counted.get(current, 0) + 1
                for listed, count in counted.items():  # the last table of a list is the one spoken of
                    if current == listed or current.startswith(f"{listed}."):
                        current = f"{listed}[{count}]{current[len(listed) :]}"
                if current == wanted or current.startswith((f"{wanted}.", f"{wanted}[")):
                    return number
                continue
            entry = re.match(r"\s*([^=#]+?)\s*=", line)
            if entry:
                name = entry.group(1).replace('"', "").replace("'", "")
                if (f"{current}.{name}" if current else name) == wanted:
                    return number
        return None

    def _header_line(self) -> int | None:
        head, _, last = self.path.rpartition(".")
        return Table({}, self.source, self.text, head)._line(last)


def _is_table(value: Any) -> bool:
    return isinstance(value, dict) or (isinstance(value, list) and bool(value) and isinstance(value[0], dict))
