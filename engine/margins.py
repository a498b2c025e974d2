"""`compute()`: all margins of a project, or only those that changed since an earlier state of it."""

from __future__ import annotations

from engine.patch import Patch
from engine.project import Project
from engine.table import MarginTable

__all__ = ["MarginTable", "compute"]


def compute(project: Project, previous: MarginTable | None = None) -> MarginTable:
    """All margins of a project.

    With the table of an earlier state of the project only what changed is computed, and its arrays are taken over:
    `previous` cannot be read afterwards.
    """
    if previous is None:
        return MarginTable(project)
    patch = Patch.between(previous, project)
    return MarginTable(project) if patch is None else patch.apply()
