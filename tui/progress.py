"""A line on standard error for work that takes more than a second."""

from __future__ import annotations

import threading
from types import TracebackType
from typing import TextIO

PATIENCE = 1.0
"""Seconds before anything is said."""


class Progress:
    """Says what is being done, and for how long, while a `with` block lasts longer than a second."""

    def __init__(self, what: str, stream: TextIO) -> None:
        self._what, self._stream = what, stream
        self._done = threading.Event()
        self._said = False
        self._thread = threading.Thread(target=self._watch, daemon=True)

    def _watch(self) -> None:
        seconds = 0.0
        while not self._done.wait(PATIENCE):
            seconds += PATIENCE
            self._said = True
            self._stream.write(
                f"\r{self._what}: {seconds:.0f} s "
                if self._stream.isatty()
                else ("" if seconds > PATIENCE else f"{self._what} ...\n")
            )
            self._stream.flush()

    def __enter__(self) -> Progress:
        self._thread.start()
        return self

    def __exit__(
        self, kind: type[BaseException] | None, error: BaseException | None, trace: TracebackType | None
    ) -> None:
        self._done.set()
        self._thread.join()
        if self._said and self._stream.isatty():
            self._stream.write("\r" + " " * (len(self._what) + 12) + "\r")
            self._stream.flush()
