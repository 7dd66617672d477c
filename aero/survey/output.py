"""Outputs that are whole or absent: a folder or a file appears under its name only when finished."""

from __future__ import annotations

import contextlib
import fnmatch
import shutil
import tempfile
from collections.abc import Collection, Iterator
from pathlib import Path
from typing import IO

from aero.errors import InputError

PREFIX = ".aero-"  # of the working folder beside a target
LOCK = "lock"


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
        sweep(parent)
        work = Path(tempfile.mkdtemp(prefix=PREFIX, dir=parent))
    except OSError as error:
        raise InputError(f"cannot write there ({error.strerror})", source=str(target)) from None
    try:
        with held(work):
            new = work / "new"
            if folder:
                new.mkdir()
            yield new
            if path.exists():
                # it may have appeared meanwhile: another run is not overwritten without being asked
                _check(path, replace=replace, folder=folder)
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


@contextlib.contextmanager
def held(work: Path) -> Iterator[None]:
    """Hold a lock in a working folder for as long as its process lives, so that `sweep` leaves it alone."""
    with (work / LOCK).open("w") as file:
        with contextlib.suppress(OSError):
            _lock(file)
        yield


def sweep(parent: Path) -> None:
    """Remove working folders that a killed run left behind: those whose lock nobody holds."""
    for work in parent.glob(f"{PREFIX}*"):
        with contextlib.suppress(OSError), (work / LOCK).open("r+") as file:
            _lock(file)
            shutil.rmtree(work, ignore_errors=True)


def _lock(file: IO[str]) -> None:
    """Lock a file, or raise OSError where another process holds it or the system has no such locks."""
    try:
        import fcntl
    except ImportError:
        raise OSError("no file locks on this system") from None
    fcntl.flock(file, fcntl.LOCK_EX | fcntl.LOCK_NB)


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


def check_target(target: str | Path, *, replace: bool, folder: bool) -> None:
    """Raise early what `whole` would raise about an existing target, before any long work."""
    if not str(target).strip():
        raise InputError("is empty, expected the name of what to write", source="--out")
    _check(Path(target), replace=replace, folder=folder)


def only_ours(path: Path, ours: Collection[str]) -> None:
    """Raise an InputError where a folder that is to be replaced holds a file we do not write.

    Parameters
    ----------
    path : Path
    ours : collection of str
        Patterns of our own files, relative to the folder.
    """
    if not path.is_dir():
        return
    for file in sorted(path.rglob("*")):
        name = file.relative_to(path).as_posix()
        if not file.is_dir() and not any(fnmatch.fnmatchcase(name, pattern) for pattern in ours):
            raise InputError(
                f"holds '{name}', which is no part of such an output, so the folder is not replaced",
                source=str(path),
                remedy="move that file away or choose another name",
            )
