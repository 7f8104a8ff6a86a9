"""The tables of ASCE/SEI 7-16 as the kit carries them: form, provenance, order, and entries against documents.

Documents are named beside each value; what no document confirms is marked "from memory".
"""

from __future__ import annotations

import math
from importlib import resources

import pytest

from calckit.core.record import Source
from calckit.core.table import Table, load
from calckit.errors import UnknownNameError
from calckit.standards.asce7.declared import SYMBOLS

PACKAGE = "calckit.standards.asce7"
NAMES = (
    "C_t", "C_u", "F_PGA", "F_a", "F_v", "I_e", "category_S_D1", "category_S_DS", "components_architectural",
    "components_mechanical", "drift", "systems",
)  # fmt: skip
OF_7_22 = ("systems_7_22", "components_mechanical_7_22")
"""Tables that ASCE 7-22 alone has."""
HEADER = (
    "standard", "edition", "table", "title", "clause", "rows", "columns", "unit", "interpolation", "obtained",
    "documents", "note",
)  # fmt: skip
OBTAINED = {"found", "memory, high", "memory, medium", "memory, low"}
FAMILIES = {
    "bearing wall", "building frame", "moment frame", "dual with special moment frame",
    "dual with intermediate moment frame", "wall-frame interactive", "cantilevered column", "not detailed for seismic",
}  # fmt: skip
FEET_IN_A_METER = 3.28084


def table(name: str) -> Table:
    """A table of the standard."""
    return load(PACKAGE, name)


def numbers(row: tuple[str, ...]) -> list[float]:
    """The entries of a row that are numbers."""
    return [float(text) for text in row if text.replace(".", "", 1).isdigit()]


def test_these_are_all_tables() -> None:
    folder = resources.files(PACKAGE) / "tables"
    assert sorted(path.name for path in folder.iterdir()) == sorted(f"{name}.csv" for name in (*NAMES, *OF_7_22))


@pytest.mark.parametrize("name", (*NAMES, *OF_7_22))
def test_header_is_complete(name: str) -> None:
    header = table(name).header
    assert [key for key in HEADER if not header.get(key)] == []
    year = "22" if name in OF_7_22 else "16"
    assert (header["standard"], header["edition"]) == (f"ASCE/SEI 7-{year}", f"ASCE 7-{year}")
    assert header["interpolation"] in ("linear", "none")


@pytest.mark.parametrize("name", (*NAMES, *OF_7_22))
def test_every_row_says_how_it_was_obtained(name: str) -> None:
    standard = table(name).header["standard"]
    for key in table(name).rows:
        source = table(name).source(key)
        assert source.obtained in OBTAINED, key
        assert source == Source(standard, table(name).name, obtained=source.obtained, standard=True)


@pytest.mark.parametrize("name", (*NAMES, *OF_7_22))
def test_every_entry_is_filled_and_keys_are_unique(name: str) -> None:
    text = (resources.files(PACKAGE) / "tables" / f"{name}.csv").read_text(encoding="utf-8")
    rows = [line for line in text.splitlines() if line and not line.startswith("#")][1:]
    assert len(table(name).rows) == len(rows)
    assert all(cell for row in table(name).rows.values() for cell in row)


def test_metric_coefficients_of_the_period_follow_from_the_others() -> None:
    """A height of 3.28084 ft is one meter; the metric value is printed to three digits."""
    for key in table("C_t").rows:
        row = table("C_t").row(key)
        exact = float(row["C_t (ft)"]) * FEET_IN_A_METER ** float(row["x"])
        assert float(row["C_t (m)"]) == pytest.approx(exact, abs=0.5e-4), key
        assert float(row["C_t (m)"]) == pytest.approx(exact, rel=1.0e-3), key


@pytest.mark.parametrize("name", ["F_a", "F_v"])
def test_site_coefficients_do_not_rise_with_the_shaking(name: str) -> None:
    for key, row in table(name).rows.items():
        values = numbers(row)
        assert values == sorted(values, reverse=True), key


@pytest.mark.parametrize(("name", "text"), [("F_a", "see 11.4.8"), ("F_v", "see 11.4.8")])
def test_entries_without_a_value_stand_at_the_strong_end(name: str, text: str) -> None:
    for key, row in table(name).rows.items():
        words = [cell == text for cell in row[:-1]]
        assert words == sorted(words), key
        assert len(numbers(row)) + sum(words) == len(words), key


def test_softer_sites_amplify_more_where_shaking_is_weak() -> None:
    """From memory: at the first column the rows rise from A to E."""
    for name in ("F_a", "F_v"):
        first = [float(row[0]) for key, row in table(name).rows.items() if key in "ABCDE"]
        assert first == sorted(first)


def test_period_limit_falls_with_the_shaking() -> None:
    values = numbers(table("C_u").rows["C_u"])
    assert values == sorted(values, reverse=True)
    assert [float(column) for column in table("C_u").columns] == [0.1, 0.15, 0.2, 0.3, 0.4]


@pytest.mark.parametrize("name", ["category_S_DS", "category_S_D1"])
def test_categories_grow_with_shaking_and_risk(name: str) -> None:
    bounds = [float(key) for key in table(name).rows]
    assert bounds == sorted(bounds)
    assert bounds[0] == 0
    for column in range(4):
        letters = [row[column] for row in table(name).rows.values()]
        assert letters == sorted(letters)
    for row in table(name).rows.values():
        assert list(row[:4]) == sorted(row[:4])


def test_allowable_drift_does_not_grow_with_risk() -> None:
    for key, row in table("drift").rows.items():
        values = numbers(row)
        assert values == sorted(values, reverse=True), key
        assert len(values) == 4
    assert SYMBOLS["drift_class"].choices == tuple(table("drift").rows)


def test_system_keys() -> None:
    keys = list(table("systems").rows)
    assert {key.partition(": ")[0] for key in keys} == FAMILIES
    assert [key for key in keys if key.replace("AAC", "aac") != key.lower()] == []
    assert [key for key in keys if "," in key or ";" in key] == []
    labels = [table("systems").row(key)["row"] for key in keys]
    assert len(set(labels)) == len(keys) == 85


def test_height_limits_only_tighten_with_the_category() -> None:
    def height(text: str) -> float:
        return math.inf if text == "NL" else 0.0 if text == "NP" else float(text)

    for key in table("systems").rows:
        row = table("systems").row(key)
        limits = [height(row[category]) for category in "BCDEF"]
        assert limits == sorted(limits, reverse=True), key
        assert set(limits) <= {math.inf, 160, 100, 65, 40, 35, 0}, key


def test_system_factors_are_in_range_and_name_a_period_row() -> None:
    for key in table("systems").rows:
        row = table("systems").row(key)
        for name in ("R", "Omega_0", "C_d"):
            assert SYMBOLS[name].fault(float(row[name]), "") is None, (key, name)
        assert row["period"] in table("C_t").rows, key


FOUND = [
    # N. Taly, Design of Reinforced Masonry Structures, 2nd edition, Example 7.9, p. 7.49 (ASCE 7-05): R = 5.5
    ("systems", "building frame: special reinforced masonry", "R", "5.5"),
    # City of Santa Ana (California), building permit record 370584, p. 131: R = 6.5, class B F_a 0.9, C_t 0.02, x 0.75
    ("systems", "bearing wall: light frame wood with wood panel or steel sheet", "R", "6.5"),
    ("F_a", "B", "1.25", "0.9"),
    ("C_t", "other", "C_t (ft)", "0.020"),
    ("C_t", "other", "x", "0.75"),
    # "ASCE 7-22 Shakes Things Up", manufacturer's engineering article, May 2026 (secondary): buckling-restrained frames
    ("systems", "building frame: buckling-restrained braced frame", "R", "8"),
    ("systems", "building frame: buckling-restrained braced frame", "Omega_0", "2.5"),
    ("C_t", "buckling-restrained braced frame", "C_t (ft)", "0.030"),
    # FEMA 451, Example 3.1 (Stockton), from memory, medium: steel special moment frame, T_a 1.59 s from 0.028, 0.8
    ("systems", "moment frame: steel special moment frame", "R", "8"),
    ("systems", "moment frame: steel special moment frame", "C_d", "5.5"),
    ("C_t", "steel moment frame", "C_t (ft)", "0.028"),
    ("C_t", "steel moment frame", "x", "0.8"),
    # NCSEA, "Frequently Misunderstood Seismic Provisions", slides of 18 June 2020
    ("I_e", "III", "I_e", "1.25"),
    ("I_e", "IV", "I_e", "1.50"),
    # Extract of ASCE/SEI 7-16 section 11.4 in university course notes (secondary source)
    ("F_v", "D", "0.2", "2.2"),
    ("F_v", "C", "0.6", "1.4"),
    ("F_v", "E", "0.2", "see 11.4.8"),
    # FEMA 451, Example 3.1 (Stockton), from memory, medium: C_u T_a = 2.23 s is 1.4 times 1.59 s at S_D1 0.373
    ("C_u", "C_u", "0.4", "1.4"),
    # FEMA 451, Example 3.1 (Stockton), drift table, from memory, medium: 3.00 in over 150 in
    ("drift", "all other", "II", "0.020"),
]


@pytest.mark.parametrize(("name", "row", "column", "text"), FOUND)
def test_entries_of_published_documents(name: str, row: str, column: str, text: str) -> None:
    assert table(name).row(row)[column] == text


def test_interpolation_prints_its_bracket() -> None:
    found = table("F_v").along("D", "S_1", 0.468)
    assert found.expression == "1.9 + (1.8 - 1.9)*(S_1 - 0.4)/(0.5 - 0.4)"
    assert found.detail == "Table 11.4-2, row D, between columns 0.4: 1.9 and 0.5: 1.8"


def test_class_e_has_no_value_to_interpolate_to() -> None:
    assert table("F_v").along("E", "S_1", 0.15).text == "see 11.4.8"
    assert table("F_v").along("E, Supplement 1", "S_1", 0.15).expression == "4.2 + (3.3 - 4.2)*(S_1 - 0.1)/(0.2 - 0.1)"


def test_band_takes_its_lower_bound() -> None:
    assert table("category_S_DS").band("II", 0.50, "S_DS").text == "D"
    assert table("category_S_DS").band("II", 0.4999, "S_DS").text == "C"
    assert table("category_S_D1").band("IV", 0.2, "S_D1").text == "D"


def test_unknown_system_lists_near_rows() -> None:
    with pytest.raises(UnknownNameError, match=r"row 'moment frame: steel special' is not known") as caught:
        table("systems").row("moment frame: steel special")
    assert "moment frame: steel special moment frame" in caught.value.known[:4]
