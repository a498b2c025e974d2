"""`python -m tests.bench [SECTION ...]`: run the sections named, or all, and print a table of each."""

import os
import sys
from importlib import import_module

SECTIONS = {
    "kernel": "equivalent stresses of 2 million states",
    "table": "margins of a 1,000 x 1,000 project, and again after an edit",
}
"""Section, which is a module beside this one with `rows() -> Iterator[Row]`, and what it is about."""

BLAS_THREADS = ("OPENBLAS_NUM_THREADS", "MKL_NUM_THREADS", "OMP_NUM_THREADS", "VECLIB_MAXIMUM_THREADS")


def one_blas_thread() -> None:
    """Hold BLAS and LAPACK to one thread. They read this when they load, so NumPy must not be there yet."""
    if "numpy" in sys.modules:
        raise RuntimeError("NumPy is loaded already, so its BLAS cannot be held to one thread")
    for name in BLAS_THREADS:
        os.environ[name] = "1"


def main(names: list[str]) -> int:
    unknown = [name for name in names if name not in SECTIONS]
    if unknown:
        print(f"no section named {', '.join(unknown)}; there are: {', '.join(SECTIONS)}", file=sys.stderr)
        return 2
    one_blas_thread()
    from .timing import print_rows  # now, not above: a section or its tools may load NumPy

    for name in names or SECTIONS:
        print_rows(f"{name}: {SECTIONS[name]}", import_module(f".{name}", __package__).rows())
    return 0


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
