"""A real pseudo-terminal with an emulator behind it: what is typed at the program, and what a person would see."""

from __future__ import annotations

import fcntl
import os
import pty
import re
import select
import signal
import struct
import subprocess
import termios
from collections.abc import Mapping, Sequence
from contextlib import suppress
from pathlib import Path
from time import monotonic

import pyte

PATIENCE = 20.0
"""Seconds until something that never shows is a failure."""
KEYS = {
    "up": "\x1b[A",
    "down": "\x1b[B",
    "right": "\x1b[C",
    "left": "\x1b[D",
    "enter": "\r",
    "escape": "\x1b",
    "f2": "\x1bOQ",
    "f3": "\x1bOR",
    "ctrl+q": "\x11",
    "ctrl+s": "\x13",
    "ctrl+z": "\x1a",
    "ctrl+end": "\x1b[1;5F",
}
_UNKNOWN = re.compile(rb"\x1b\[[<>=?][\d;]*u|\x1b\[\?[\d;]*\$p|\x1b\[6n")
"""Sequences that the emulator does not know, and would print."""


class Terminal:
    """A program in a pseudo-terminal. To be used in a `with` block, which ends the program."""

    def __init__(
        self,
        argv: Sequence[str],
        size: tuple[int, int] = (80, 24),
        env: Mapping[str, str] | None = None,
        cwd: Path | None = None,
    ) -> None:
        columns, rows = size
        self.screen = pyte.Screen(columns, rows)
        self._stream = pyte.ByteStream(self.screen)
        self._rest = b""
        self.raw = b""
        self._master, slave = pty.openpty()
        self._set_size(slave, size)
        environment = {k: v for k, v in os.environ.items() if k not in {"LINES", "COLUMNS", "NO_COLOR", "COLORTERM"}}
        environment |= {"TERM": "xterm-256color", "LC_ALL": "C.UTF-8", **(env or {})}
        self.program = subprocess.Popen(
            argv, stdin=slave, stdout=slave, stderr=slave, env=environment, cwd=cwd,
            start_new_session=True, preexec_fn=lambda: fcntl.ioctl(0, termios.TIOCSCTTY, 0),
        )  # fmt: skip
        os.close(slave)

    def __enter__(self) -> Terminal:
        return self

    def __exit__(self, *_: object) -> None:
        if self.program.poll() is None:
            self.program.kill()
            self.program.wait()
        os.close(self._master)

    @staticmethod
    def _set_size(handle: int, size: tuple[int, int]) -> None:
        columns, rows = size
        fcntl.ioctl(handle, termios.TIOCSWINSZ, struct.pack("HHHH", rows, columns, 0, 0))

    def resize(self, columns: int, rows: int) -> None:
        """Give the terminal another size, as a person pulling at its window does."""
        self.screen.resize(rows, columns)
        self._set_size(self._master, (columns, rows))

    @property
    def lines(self) -> list[str]:
        """The screen without blanks at line ends."""
        return [line.rstrip() for line in self.screen.display]

    @property
    def text(self) -> str:
        """The same in one."""
        return "\n".join(self.lines)

    def row(self, name: str) -> str:
        """The line that begins with a name; empty where there is none."""
        return next((line for line in self.lines if line.strip().startswith(name)), "")

    def _read(self, seconds: float) -> bool:
        """Take in what the program has written meanwhile; whether there was anything."""
        ready, _, _ = select.select([self._master], [], [], seconds)
        if not ready:
            return False
        with suppress(OSError):  # the program has ended and closed its side
            data = os.read(self._master, 1 << 16)
            self.raw += data
            for _ in range(data.count(b"\x1b[6n")):
                os.write(self._master, b"\x1b[1;1R")
            self._feed(self._rest + data)
            return bool(data)
        return False

    def _feed(self, data: bytes) -> None:
        """Give whole sequences to the emulator; one that is cut at the end waits for its rest."""
        cut = data.rfind(b"\x1b")
        whole = cut < 0 or re.search(rb"[A-Za-z\x07\\]", data[cut + 2 :])
        data, self._rest = (data, b"") if whole else (data[:cut], data[cut:])
        self._stream.feed(_UNKNOWN.sub(b"", data))

    def until(self, *texts: str, gone: str = "") -> None:
        """Wait until all these texts stand on the screen, and another no more; fails with what is there instead."""
        deadline = monotonic() + PATIENCE
        while not all(text in self.text for text in texts) or (gone and gone in self.text):
            assert monotonic() < deadline, f"{texts} did not come:\n{self.text}"
            self._read(0.05)

    def press(self, *keys: str) -> None:
        """Type keys, by name or as they are, one right after the other."""
        os.write(self._master, "".join(KEYS.get(key, key) for key in keys).encode())

    def ended(self) -> int:
        """Wait for the end of the program; its exit status."""
        deadline = monotonic() + PATIENCE
        while self.program.poll() is None:
            assert monotonic() < deadline, f"the program did not end:\n{self.text}"
            self._read(0.02)
        while self._read(0.0):
            pass
        return self.program.returncode

    def signal(self, number: signal.Signals) -> None:
        """Send the program a signal."""
        os.kill(self.program.pid, number)
