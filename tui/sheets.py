"""Which sheets there are, under which function key each stands, and how each is made."""

from __future__ import annotations

from .cautions_sheet import CautionsSheet
from .document import Document
from .loads_sheet import LoadsSheet
from .margins_sheet import MarginsSheet
from .record_sheet import (
    CATEGORY_FIELDS,
    LOAD_FIELDS,
    MATERIAL_FIELDS,
    POINT_FIELDS,
    SECTION_FIELDS,
    RecordSheet,
    SettingsSheet,
)
from .sheet import WorkSheet
from .stress_sheet import StressSheet

ORDER: tuple[tuple[int, str, str], ...] = (
    (2, "margins", "Margins"),
    (3, "loads", "Loads"),
    (4, "points", "Points"),
    (5, "materials", "Materials"),
    (6, "sections", "Sections"),
    (7, "project", "Project"),
    (8, "categories", "Categories"),
    (9, "cautions", "Cautions"),
    (10, "load-list", "Load list"),
)
"""Number of the function key, key of the sheet, title."""


def make_sheet(key: str, document: Document, subject: str = "") -> WorkSheet:
    """A sheet of a document; subject: name of the point whose rows it shows."""
    match key:
        case "margins":
            return MarginsSheet(document)
        case "loads":
            return LoadsSheet(document)
        case "points":
            return RecordSheet(document, "point", key, "Points", POINT_FIELDS)
        case "materials":
            return RecordSheet(document, "material", key, "Materials", MATERIAL_FIELDS)
        case "sections":
            return RecordSheet(document, "section", key, "Sections: kept in the file, not computed yet", SECTION_FIELDS)
        case "project":
            return SettingsSheet(document)
        case "categories":
            return RecordSheet(document, "category", key, "Categories and their required factors", CATEGORY_FIELDS)
        case "cautions":
            return CautionsSheet(document)
        case "load-list":
            return RecordSheet(document, "load", key, "Loads, their units and senses", LOAD_FIELDS)
        case "stress" | "per-load":
            return StressSheet(document, key, subject)
        case _:
            raise KeyError(key)
