"""A run folder: all the files a search leaves behind, written whole or not at all."""

from __future__ import annotations

import shutil
from collections.abc import Callable, Iterator, Mapping
from contextlib import contextmanager
from pathlib import Path, PurePath
from secrets import token_hex

from optimizer.errors import InputError, Problem

RUN_FILE = "run.json"
"""The file by which a folder is known to be a run."""

STUDY_FILE = "study.toml"
"""The study as it was searched, byte for byte."""

Content = bytes | str | Callable[[Path], None]
"""What a file is to hold, or a function that writes it to the path it is given."""


def write_run(folder: Path, files: Mapping[str, Content], *, overwrite: bool = True) -> Path | None:
    """Write a run folder whole or not at all.

    The files are first completed in a folder beside it, which then takes its name; an earlier run there is
    replaced only at that moment. On any exception, an interrupt included, nothing is left behind and an
    earlier run is as it was. An earlier run that holds files of other names than the new ones (notes, design
    sheets) is not deleted but kept beside the new one.

    Args:
        folder: the run folder; folders above it are made where missing.
        files: content by path inside the folder, with "/" between parts; "run.json" is among them.
        overwrite: whether an earlier run there may be replaced.

    Returns:
        Where an earlier run was kept; None where there was none or all of its files were replaced.

    Raises:
        InputError: where `folder` exists and is no wattfront run, or may not be replaced or written.
        ValueError: for a file name that leaves the folder, or without "run.json".
    """
    _check_names(files)
    target = Path(folder).resolve()
    _check_replaceable(folder, target, overwrite)
    with _made_above(folder, target), _beside(target) as new:
        _make(folder, new)
        for name, content in files.items():
            _write(new / name, content)
        return _swap(target, new, frozenset(PurePath(name) for name in files))


def check_folder(folder: Path) -> None:
    """Raise InputError where a run can not be written to `folder`."""
    _check_replaceable(folder, Path(folder).resolve(), overwrite=True)


def parts_copy(place: int, path: Path) -> str:
    """Name inside a run folder of the copy of a study's parts file, the `place`-th."""
    return f"parts/{place + 1}-{path.name}"


def write_whole(path: Path, content: Content) -> None:
    """Write one file whole or not at all; an earlier file of that name is replaced at the end.

    Args:
        path: the file; its folder exists.
        content: what it is to hold, or a function that writes it to the path it is given.
    """
    with _beside(Path(path).resolve()) as new:
        _write(new, content)
        new.replace(path)


def _check_names(files: Mapping[str, Content]) -> None:
    for name in files:
        inside = PurePath(name)
        if inside.is_absolute() or not inside.parts or ".." in inside.parts:
            raise ValueError(f"file of a run: given {name!r}, expected a path inside the run folder")
    if RUN_FILE not in files:
        raise ValueError(f"files of a run: given {sorted(files)}, expected {RUN_FILE!r} among them")


def _check_replaceable(folder: Path, target: Path, overwrite: bool) -> None:
    if not target.exists():
        return
    if not target.is_dir():
        raise _refused(folder, "a file", "a folder for the run")
    if any(target.iterdir()):
        if not (target / RUN_FILE).is_file():
            expected = "a new or empty folder, or an earlier run to replace"
            raise _refused(folder, f"a folder that holds other things and no {RUN_FILE}", expected)
        if not overwrite:
            raise _refused(folder, "a folder with an earlier run", "a new or empty folder")


def _swap(target: Path, new: Path, names: frozenset[PurePath]) -> Path | None:
    """Give the complete new folder the target's name; return where the old one was kept, if it was."""
    if not target.exists():
        new.rename(target)
        return None
    old = _free_name(target)
    target.rename(old)
    try:
        new.rename(target)
    except BaseException:
        old.rename(target)
        raise
    found = (path for path in old.rglob("*") if path.is_symlink() or not path.is_dir())
    others = {path.relative_to(old) for path in found} - names
    if others:
        return old
    shutil.rmtree(old, ignore_errors=True)
    return None


def _free_name(target: Path) -> Path:
    number = 1
    while (candidate := target.with_name(f"{target.name}.earlier-{number}")).exists():
        number += 1
    return candidate


def _write(path: Path, content: Content) -> None:
    path.parent.mkdir(parents=True, exist_ok=True)
    if callable(content):
        content(path)
        if not path.is_file():
            raise RuntimeError(f"the writer of {path.name} has written nothing")
    else:
        path.write_bytes(content.encode() if isinstance(content, str) else content)


@contextmanager
def _beside(target: Path) -> Iterator[Path]:
    """A free path beside the target; whatever still lies there at the end is removed.

    Its name ends as the target's does, since writers of tables and charts go by the suffix.
    """
    path = target.with_name(f".{token_hex(4)}.{target.name}")
    try:
        yield path
    finally:
        if path.is_dir():
            shutil.rmtree(path, ignore_errors=True)
        else:
            path.unlink(missing_ok=True)


@contextmanager
def _made_above(folder: Path, target: Path) -> Iterator[None]:
    """Make the folders above the target; on an exception remove those that were made."""
    missing = [above for above in target.parents if not above.exists()]
    try:
        _make(folder, target.parent)
        yield
    except BaseException:
        for above in missing:
            if above.is_dir() and not any(above.iterdir()):
                above.rmdir()
        raise


def _make(folder: Path, path: Path) -> None:
    try:
        path.mkdir(parents=True, exist_ok=True)
    except OSError as trouble:
        given = f"a folder that cannot be made ({trouble.strerror})"
        raise _refused(folder, given, "a folder to write to") from trouble


def _refused(folder: Path, given: str, expected: str) -> InputError:
    return InputError(Problem(given, expected, file=str(folder)))
