"""Outputs that are whole or absent: a folder or a file appears under its name only when finished."""

from __future__ import annotations

import contextlib
import shutil
import tempfile
from collections.abc import Iterator
from pathlib import Path

from aero.errors import InputError


@contextlib.contextmanager
def whole(target: str | Path, *, replace: bool, folder: bool) -> Iterator[Path]:
    """Give a place to write; move it to `target` when the block ends well, remove it otherwise.

    Parameters
    ----------
    target : path
        Folder or file to appear.
    replace : bool
        Whether an existing one may be replaced; the old one goes only when the new one is whole.
    folder : bool
        Whether a folder or a file is written.

    Raises
    ------
    InputError
        If the target exists and may not be replaced, is of the other kind, or cannot be written.
    """
    path = Path(target)
    _check(path, replace=replace, folder=folder)
    parent = path.absolute().parent
    missing = [p for p in (parent, *parent.parents) if not p.exists()]
    try:
        parent.mkdir(parents=True, exist_ok=True)
        work = Path(tempfile.mkdtemp(prefix=".aero-", dir=parent))
    except OSError as error:
        raise InputError(f"cannot write there ({error.strerror})", source=str(target)) from None
    try:
        new = work / "new"
        if folder:
            new.mkdir()
        yield new
        if path.exists():
            path.rename(work / "old")
        new.rename(path)
    except OSError as error:
        if not path.exists() and (work / "old").exists():
            (work / "old").rename(path)
        raise InputError(f"cannot be written ({error.strerror or error})", source=str(target)) from error
    finally:
        shutil.rmtree(work, ignore_errors=True)
        if not path.exists():
            for made in missing:
                with contextlib.suppress(OSError):
                    made.rmdir()


def _check(path: Path, *, replace: bool, folder: bool) -> None:
    if not path.exists():
        return
    if folder != path.is_dir():
        kind = "a folder" if path.is_dir() else "a file"
        wanted = "folder" if folder else "file"
        raise InputError(
            f"is {kind}, expected to write a {wanted}", source=str(path), remedy="choose another name"
        )
    if folder and not any(path.iterdir()):
        return
    if not replace:
        raise InputError("exists", source=str(path), remedy="choose another name or pass --replace")


def check_target(target: str | Path, *, replace: bool, folder: bool, ours: str = "survey.json") -> None:
    """Raise early what `whole` would raise about an existing target, before any long work.

    With `replace`, a folder is replaced only when it holds an earlier output of ours (or nothing), known by the
    file `ours` in it, so that a mistyped name cannot wipe somebody's files.
    """
    path = Path(target)
    _check(path, replace=replace, folder=folder)
    if folder and replace and path.is_dir() and any(path.iterdir()) and not (path / ours).is_file():
        raise InputError(
            f"is a folder that holds no {ours.partition('.')[0]}, so it is not replaced",
            source=str(path),
            remedy="choose another name",
        )
