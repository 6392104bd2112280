"""Published live loads and worked reductions: shared/verification/actions.toml."""

import pytest
from published import published, wrong


@pytest.mark.parametrize("row", published("actions", "columns", by="source"))
def test_worked_columns(row):
    assert wrong(row) == []


@pytest.mark.parametrize("row", published("actions", "influence areas", by="area,L/L0"))
def test_the_reduction_curve(row):
    assert wrong(row) == []


@pytest.mark.parametrize("row", published("actions", "areas", by="area,αA"))
def test_the_eurocode_table_of_areas(row):
    assert wrong(row) == []


@pytest.mark.parametrize("row", published("actions", "EN 1991-1-1", by="category,qk,Qk"))
def test_imposed_loads_of_en_1991(row):
    assert wrong(row) == []


@pytest.mark.parametrize("row", published("actions", "ASCE 7-22", by="occupancy,L0,point"))
def test_live_loads_of_asce_7(row):
    assert wrong(row) == []


@pytest.mark.parametrize("row", published("actions", "ASCE 7-22 metric", by="occupancy,metric"))
def test_the_standards_own_metric_values(row):
    assert wrong(row) == []
