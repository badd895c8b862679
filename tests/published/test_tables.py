"""The tables themselves: every value has a source, a tolerance and the reason for it."""

from collections import Counter

import pytest
from published_values import PROVENANCES, TABLES, rows

ALL_TABLES = sorted(path.stem for path in TABLES.glob("*.csv"))
CHECK_TABLES = [table for table in ALL_TABLES if "tolerance" in rows(table)[0]]
SOURCED_TABLES = [table for table in ALL_TABLES if "source" in rows(table)[0]]


@pytest.mark.parametrize("table", SOURCED_TABLES)
def test_every_row_names_its_source_and_how_it_was_read(table: str) -> None:
    for row in rows(table):
        assert row["source"], row
        assert row["provenance"] in PROVENANCES, row


@pytest.mark.parametrize("table", CHECK_TABLES)
def test_every_tolerance_is_positive_and_has_a_reason(table: str) -> None:
    for row in rows(table):
        assert float(row["tolerance"]) > 0, row
        assert row["tolerance_kind"] in ("absolute", "relative"), row
        assert row["tolerance_reason"], row
        assert row["unit"], row


@pytest.mark.parametrize("table", CHECK_TABLES)
def test_no_two_rows_share_an_id(table: str) -> None:
    repeated = [i for i, count in Counter(row["id"] for row in rows(table)).items() if count > 1]
    assert not repeated
