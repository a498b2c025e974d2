"""A file written so that at every moment it is there, whole: the old one or the new one."""

from __future__ import annotations

import errno
import os
import secrets
import shutil
import stat
from collections.abc import Iterator
from contextlib import contextmanager, suppress
from pathlib import Path

from engine.reading import clean

_UNSUPPORTED = {errno.EINVAL, errno.ENOTSUP, errno.EACCES, errno.EPERM, errno.EISDIR, errno.EBADF}


class SaveError(Exception):
    """A file could not be written; the message says what failed and what is safe."""


def replace_file(path: str | os.PathLike[str], data: bytes) -> None:
    """Writes a file by way of a temporary one beside it; the file before is kept as `path~`.

    Symbolic links are followed, permissions kept; a new file has those that the umask leaves. Nothing is written where
    the file holds the data already. Raises SaveError; the file before is then untouched, or the new one is in place.
    """
    shown = clean(os.fspath(path))
    with _said(f"{shown} was not saved", "the file before is untouched"):
        target = Path(os.path.realpath(path))
        mode = _writable(target)
        if mode is not None and target.read_bytes() == data:
            return
        with _beside(target) as fresh:
            _write(fresh, data, mode)
            if mode is not None:
                _keep(target)
            os.replace(fresh, target)
    with _said(f"{shown} is saved, but its folder could not be flushed", "a power cut now might lose the save"):
        _flush_folder(target.parent)


@contextmanager
def _said(what: str, safe: str) -> Iterator[None]:
    """Puts an error of the system into words."""
    try:
        yield
    except ValueError as error:
        raise SaveError(f"{what}: the name is no file name; {safe}") from error
    except OSError as error:
        name = clean(str(error.filename)) if error.filename else ""
        reason = clean(error.strerror or str(error))
        raise SaveError(f"{what}: {reason}{f' ({name})' if name else ''}; {safe}") from error


def _writable(target: Path) -> int | None:
    """Permissions of the file that is to be replaced, None where there is none."""
    try:
        found = target.stat()
    except FileNotFoundError:
        return None
    if stat.S_ISDIR(found.st_mode):
        raise IsADirectoryError(errno.EISDIR, "it is a folder")
    if not stat.S_ISREG(found.st_mode):
        raise OSError(errno.EINVAL, "it is not an ordinary file")
    if not os.access(target, os.W_OK):
        raise PermissionError(errno.EACCES, "it may not be written (read-only)")
    return stat.S_IMODE(found.st_mode)


@contextmanager
def _beside(target: Path) -> Iterator[Path]:
    """A name of a file that is not there, in the same folder; what is left under it at the end is removed."""
    path = target.parent / f".hexlipse-{secrets.token_hex(8)}.tmp"
    try:
        yield path
    finally:
        with suppress(FileNotFoundError):
            path.unlink()


def _write(path: Path, data: bytes, mode: int | None) -> None:
    """Writes a new file through to the disk."""
    flags = os.O_WRONLY | os.O_CREAT | os.O_EXCL | getattr(os, "O_BINARY", 0)
    with open(os.open(path, flags, 0o666 if mode is None else 0o600), "wb") as file:
        file.write(data)
        file.flush()
        if mode is not None:
            os.chmod(path, mode)
        os.fsync(file.fileno())


def _keep(target: Path) -> None:
    """The file as `file~`, in one step: the same file under a second name, or a copy where links are not to be had."""
    with _beside(target) as second:
        try:
            os.link(target, second)
        except OSError:
            shutil.copy2(target, second)
            with open(second, "rb+") as file:
                os.fsync(file.fileno())
        os.replace(second, f"{target}~")


def _flush_folder(folder: Path) -> None:
    """Makes the new name last through a power cut, where the system can do that to a folder."""
    try:
        handle = os.open(folder, os.O_RDONLY)
    except OSError as error:
        if error.errno in _UNSUPPORTED:
            return
        raise
    try:
        os.fsync(handle)
    except OSError as error:
        if error.errno not in _UNSUPPORTED:
            raise
    finally:
        os.close(handle)
