"""Every field of points, materials, categories, loads and settings: edited through its sheet, refused where wrong."""

from __future__ import annotations

from pathlib import Path
from typing import cast

import pytest

from engine import store
from engine.edits import Refusal
from engine.entry import EntryError
from engine.reading import Plain
from tui.document import Document
from tui.fields import plain_of
from tui.record_sheet import (
    CATEGORY_FIELDS,
    LOAD_FIELDS,
    MATERIAL_FIELDS,
    POINT_FIELDS,
    SETTINGS_FIELDS,
    RecordSheet,
    SettingsSheet,
)
from tui.sheets import make_sheet

from .small_projects import EMPTY, NO_STRESS, UNCOMPUTED

RICH = (
    NO_STRESS.replace("yield = 345.0", 'yield = 345.0\nultimate = 470.0\nelongation = 0.2\nsource = "certificate 7"')
    .replace("yield = 1.5", 'yield = 1.5\nlabel = "Normal operation"')
    .replace('unit = "N"', 'unit = "N"\nlabel = "Rope pull"')
    .replace('material = "S355"', 'material = "S355"\nfactor = 1.25\npart = "drum"')
    + "[point.per-load]\nhaul = [0.1, 0, 0, 0, 0, 0]\n"
)


def opened(text: str = RICH) -> Document:
    return Document(store.parse(text), None)


def sheet_of(document: Document, key: str) -> RecordSheet:
    return cast(RecordSheet, make_sheet(key, document))


def column(sheet: RecordSheet, path: str) -> int:
    return [field.path for field in sheet.fields].index(tuple(path.split(".")))


def typed(sheet: RecordSheet, path: str, text: str) -> Plain:
    """The value that the part's field has after an entry."""
    edit = sheet.edit(0, column(sheet, path), text)
    if edit is not None:
        sheet.document.commit(edit)
    return plain_of(sheet.kind, sheet.document.project.of(sheet.kind)[0], tuple(path.split(".")))


TAKEN = [
    # sheet, field, entry, value afterwards
    ("points", "material", "S355", "S355"),
    ("points", "factor", "1.15", 1.15),
    ("points", "factor", "yield = 1.15", {"yield": 1.15, "ultimate": 1.0}),
    ("points", "factor", "1", None),  # 1 is what an absent key means
    ("points", "factor", "", None),
    ("points", "temperature", "60", 60.0),
    ("points", "temperature", "140 degF", 60.0),  # converted with the offset
    ("points", "temperature", "LC01 = 40", {"LC01": 40.0}),
    ("points", "not-felt", "rest", "rest"),
    ("points", "part", "drum shaft", "drum shaft"),
    ("points", "part", "", None),
    ("points", "label", "Shaft, shoulder fillet", "Shaft, shoulder fillet"),
    ("points", "source", "run 12, node 4711", "run 12, node 4711"),
    ("materials", "yield", "355", 355.0),
    ("materials", "yield", "50 ksi", 344.7378646584),  # 1 ksi = 6.894757... MPa (NIST SP 811)
    ("materials", "ultimate", "", None),
    ("materials", "elongation", "0.04", 0.04),
    ("materials", "shear-yield", "190", 190.0),
    ("materials", "range", "-20 80", [-20.0, 80.0]),
    ("materials", "yield-at", "20:345 100:318", [[20.0, 345.0], [100.0, 318.0]]),
    ("materials", "ultimate-at", "20:470", [[20.0, 470.0]]),
    ("materials", "source", "EN 10025-2", "EN 10025-2"),
    ("categories", "yield.tresca", "1.6", 1.6),
    ("categories", "yield.von-mises", "3/2", 1.5),  # arithmetic, and the value there already
    ("categories", "yield.von-mises", "1.4", 1.4),
    ("categories", "loads", "design", "design"),
    ("categories", "label", "", None),
    ("load-list", "unit", "MPa", "MPa"),
    ("load-list", "unit", "", None),  # a plain multiplier
    ("load-list", "sense", "optional", "optional"),
    ("load-list", "label", "Rope pull, hauling", "Rope pull, hauling"),
]
REFUSED = [
    # sheet, field, entry, what the refusal says
    ("points", "material", "S353", 'did you mean "S355"'),
    ("points", "material", "", '"material" is missing'),
    ("points", "factor", "0", "above 0"),
    ("points", "factor", "yeild = 1.15", 'did you mean "yield"'),
    ("points", "temperature", "LC1 = 40", 'did you mean "LC01"'),
    ("points", "temperature", "warm", "not read"),
    ("points", "not-felt", "haul", "felt or not felt, not both"),
    ("points", "not-felt", "wind", 'no load is named "wind"'),
    ("points", "section", "A-A", 'no section is named "A-A"'),
    ("points", "at", "1 2", "only on a section"),
    ("points", "kt", "Mz = 1.7", "only on a section"),
    ("points", "per-load", "3", "sheet of its own"),
    ("points", "stress", "3", "sheet of its own"),
    ("materials", "yield", "0", "above 0"),
    ("materials", "yield", "", '"yield" is missing'),
    ("materials", "yield", "3 kN", "a stress or pressure"),
    ("materials", "elongation", "20", "at most 1"),
    ("materials", "elongation", "20 %", "percent"),
    ("materials", "range", "80 -20", "the lower first"),
    ("materials", "range", "80", "2 numbers are expected"),
    ("materials", "yield-at", "100:318 20:345", "must rise"),
    ("materials", "yield-at", "20:-345", "above 0"),
    ("categories", "yield.tresca", "0", "above 0"),
    ("categories", "yield.tresca", "", '"yield" is missing'),
    ("categories", "loads", "factored", '"characteristic" or "design"'),
    ("load-list", "unit", "kN", "counts forces in N"),
    ("load-list", "unit", "smoots", "smoots"),
    ("load-list", "sense", "both", '"reversible"'),
]


@pytest.mark.parametrize(("key", "path", "text", "value"), TAKEN)
def test_an_entry_becomes_the_value_of_its_field(key: str, path: str, text: str, value: Plain) -> None:
    found = typed(sheet_of(opened(), key), path, text)
    assert found == (pytest.approx(value, rel=1e-12) if isinstance(value, float) else value)


@pytest.mark.parametrize(("key", "path", "text", "why"), REFUSED)
def test_a_wrong_entry_is_refused_in_plain_words(key: str, path: str, text: str, why: str) -> None:
    document = opened()
    before, sheet = document.project, sheet_of(document, key)
    with pytest.raises((EntryError, Refusal)) as refused:
        typed(sheet, path, text)
    assert why in str(refused.value)
    assert document.project is before


def test_every_field_of_every_sheet_is_tried_above() -> None:
    fields = {"points": POINT_FIELDS, "materials": MATERIAL_FIELDS, "categories": CATEGORY_FIELDS}
    named = {(key, ".".join(f.path)) for key, found in fields.items() for f in found}
    named |= {("load-list", ".".join(field.path)) for field in LOAD_FIELDS}
    ultimate = {("categories", "ultimate.tresca"), ("categories", "ultimate.von-mises")}
    assert named - {row[:2] for row in TAKEN + REFUSED} == ultimate


@pytest.mark.parametrize("key", ["points", "materials", "categories", "load-list", "sections"])
@pytest.mark.parametrize("text", [RICH, UNCOMPUTED], ids=["rich", "uncomputed"])
def test_enter_twice_on_any_field_changes_nothing(key: str, text: str) -> None:
    sheet = sheet_of(opened(text), key)
    for row in range(sheet.size()[0]):
        for place in range(len(sheet.fields)):
            if sheet.prompt(row, place):
                assert sheet.edit(row, place, sheet.initial(row, place)) is None, sheet.fields[place]


def test_a_first_ultimate_factor_holds_for_both_theories_and_a_removed_one_for_neither() -> None:
    sheet = sheet_of(opened(), "categories")
    assert typed(sheet, "ultimate.von-mises", "2") == 2.0
    assert plain_of("category", sheet.document.project.categories[0], ("ultimate",)) == {
        "tresca": 2.0,
        "von-mises": 2.0,
    }
    assert typed(sheet, "ultimate.tresca", "2.5") == 2.5
    assert typed(sheet, "ultimate.von-mises", "") is None
    assert sheet.document.project.categories[0].ultimate is None


def test_a_point_on_a_section_says_its_place_and_concentrations() -> None:
    sheet = sheet_of(opened(UNCOMPUTED), "points")
    assert typed(sheet, "at", "2.9cm 1") == [29.0, 1.0]
    assert typed(sheet, "kt", "Mz = 1.7, T = 1.4") == {"Mz": 1.7, "T": 1.4}
    assert typed(sheet, "kt", "") is None


def test_a_section_can_be_changed_although_it_is_not_computed() -> None:
    sheet = sheet_of(opened(UNCOMPUTED), "sections")
    assert typed(sheet, "d", "2 in") == pytest.approx(50.8)
    assert typed(sheet, "not-felt", "wind") == ["wind"]
    with pytest.raises(Refusal, match="round"):
        typed(sheet, "shape", "oval")


def test_enter_on_the_rows_of_a_point_opens_them_and_says_whose() -> None:
    sheet = sheet_of(opened(), "points")
    for path in ("per-load", "stress"):
        opening = sheet.opens(0, column(sheet, path))
        assert opening is not None
        assert (opening.sheet, opening.subject) == (path, "P01")
        assert sheet.prompt(0, column(sheet, path)) == ""
    assert sheet.opens(0, column(sheet, "label")) is None
    assert sheet_of(opened(UNCOMPUTED), "sections").opens(0, 3) is None  # a count that has no sheet of its own


def test_the_prompt_names_part_field_and_unit() -> None:
    document = opened()
    assert sheet_of(document, "materials").prompt(0, 0) == "S355 yield (MPa)"
    assert sheet_of(document, "categories").prompt(0, 1) == "normal yield von-mises"
    points = sheet_of(document, "points")
    assert points.prompt(0, column(points, "temperature")) == "P01 temperature (degC)"


def test_here_says_the_value_with_its_unit_or_that_none_is_given() -> None:
    sheet = sheet_of(opened(), "materials")
    said = ["".join(text for text, _ in runs) for runs in sheet.here(0, 0)]
    assert said[1].split() == ["value", "yield:", "345", "MPa"]
    said = ["".join(text for text, _ in runs) for runs in sheet.here(0, column(sheet, "shear-yield"))]
    assert "not given" in said[1]
    assert "MPa" not in said[1]


@pytest.mark.parametrize("key", ["points", "materials", "categories", "load-list", "sections"])
def test_an_empty_sheet_says_what_to_press(key: str) -> None:
    sheet = sheet_of(opened(EMPTY), key)
    assert sheet.size()[0] == 0
    assert "Press a" in sheet.empty()
    assert sheet.here(0, 0) == []


# ---- settings


def setting(name: str) -> int:
    return [field.path[0] for field in SETTINGS_FIELDS].index(name)


def set_to(sheet: SettingsSheet, name: str, text: str) -> None:
    edit = sheet.edit(setting(name), 0, text)
    if edit is not None:
        sheet.document.commit(edit)


@pytest.mark.parametrize(
    ("name", "text", "value"),
    [
        ("title", "Slipway winch", "Slipway winch"),
        ("title", "", ""),
        ("revision", "C", "C"),
        ("revision", "", None),  # as where the key is absent
        ("accept", "tresca", "tresca"),
        ("thin", "0.05", 0.05),
        ("thin", "0", 0.0),  # no such mark
        ("units", "m-N-Pa", "m-N-Pa"),
        ("components", "xx yy zz xy zx yz", "xx yy zz xy zx yz"),
        ("notes", "Invented.", "Invented."),
        ("notes", "", None),
    ],
)
def test_every_setting_can_be_changed(name: str, text: str, value: Plain) -> None:
    sheet = SettingsSheet(opened())
    set_to(sheet, name, text)
    assert plain_of("project", sheet.document.project.settings, (name,)) == value


@pytest.mark.parametrize(
    ("name", "text", "why"),
    [
        ("accept", "mises", '"tresca"'),
        ("accept", "", "missing"),
        ("thin", "-0.1", "at least 0"),
        ("thin", "10 %", "percent"),
        ("units", "mm", '"mm-N-MPa"'),
        ("units", "in-kip-ksi", "N"),  # a load is in N
        ("components", "xx yy zz xy yz", "in any order"),
    ],
)
def test_a_wrong_setting_is_refused_in_plain_words(name: str, text: str, why: str) -> None:
    sheet = SettingsSheet(opened())
    before = sheet.document.project
    with pytest.raises((EntryError, Refusal)) as refused:
        set_to(sheet, name, text)
    assert why in str(refused.value)
    assert sheet.document.project is before


def test_enter_twice_on_any_setting_changes_nothing() -> None:
    sheet = SettingsSheet(opened())
    for row in range(sheet.size()[0]):
        assert sheet.edit(row, 0, sheet.initial(row, 0)) is None, sheet.row_name(row)


def test_another_order_of_components_keeps_every_stress(tmp_path: Path) -> None:
    document = opened()
    sheet = SettingsSheet(document)
    before = document.table.values.copy()
    set_to(sheet, "components", "zx yz xy zz yy xx")
    assert (document.table.values == before).all()
    document.save(tmp_path / "turned.toml")
    assert "haul = [0, 0, 0, 0, 0, 0.1]" in (tmp_path / "turned.toml").read_text().replace("0.0,", "0,")
