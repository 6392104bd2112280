"""Combinations written out: names, factors, and what is left out."""

import pytest

from calcpack.actions import combination_set, set_names
from calcpack.job.errors import CalcpackError
from calcpack.job.model import OwnCombination


def names(found, limit, situation=None):
    return [
        each.name
        for each in found.combinations
        if each.limit == limit and situation in (None, each.situation)
    ]


def test_single_variable_action_in_6_10():
    found = combination_set("EN 1990", ["dead", "live"], occupancy="B")
    assert names(found, "strength") == ["1.35 G + 1.5 Q", "G + 1.5 Q"]
    assert names(found, "service", "characteristic") == ["G + Q"]
    assert names(found, "service", "frequent") == ["G + 0.5 Q"]
    assert names(found, "service", "quasi-permanent") == ["G + 0.3 Q"]


def test_each_variable_action_leads_in_turn():
    found = combination_set("EN 1990", ["dead", "live", "snow"], occupancy="E")
    assert names(found, "strength") == [
        "1.35 G",
        "1.35 G + 1.5 Q",
        "1.35 G + 1.5 Q + 0.75 S",
        "1.35 G + 1.5 Q + 1.5 S",
        "G",
        "G + 1.5 Q",
        "G + 1.5 Q + 0.75 S",
        "G + 1.5 Q + 1.5 S",
    ]
    by_name = {each.name: each for each in found.combinations if each.limit == "strength"}
    # storage: ψ0 = 1.0, so snow leading brings the whole live load with it
    assert by_name["1.35 G + 1.5 Q + 1.5 S"].factors == {"dead": 1.35, "live": 1.5, "snow": 1.5}


def test_roof_live_load_never_with_snow():
    found = combination_set("EN 1990", ["dead", "live", "roof_live", "snow"])
    assert not any({"roof_live", "snow"} <= set(each.factors) for each in found.combinations)
    assert any({"live", "snow"} <= set(each.factors) for each in found.combinations)


def test_6_10a_and_b_are_each_below_6_10():
    whole = combination_set("EN 1990", ["dead", "live"]).combinations
    parts = combination_set("EN 1990 6.10a/b", ["dead", "live"]).combinations
    upper = {case: max(each.factors.get(case, 0) for each in whole) for case in ("dead", "live")}
    strength = [each for each in parts if each.limit == "strength"]
    assert [each.name for each in strength][:1] == ["1.35 G + 1.05 Q"]
    assert {each.factors["dead"] for each in strength} == {1.35, 1.0, 1.1475}
    assert all(each.factors[case] <= upper[case] for each in strength for case in each.factors)


def test_strength_design_with_roof_and_snow():
    found = combination_set("ASCE 7-22 strength", ["dead", "live", "roof_live", "snow"])
    assert names(found, "strength") == [
        "1.4 D",
        "1.2 D + 1.6 L",
        "1.2 D + 1.6 L + 0.5 Lr",
        "1.2 D + 1.6 L + 0.3 S",
        "1.2 D + L",
        "1.2 D + L + 1.6 Lr",
        "1.2 D + L + S",
    ]


def test_allowable_stress_design():
    found = combination_set("ASCE 7-22 allowable", ["dead", "live", "snow"])
    assert names(found, "strength") == ["D", "D + L", "D + 0.7 S", "D + 0.75 L", "D + 0.75 L + 0.525 S"]


def test_the_jobs_own():
    own = OwnCombination(name="storm day", limit="strength", factors={"dead": 1.1, "snow": 1.3})
    assert names(combination_set("job", ["dead", "snow"], own=[own]), "strength") == ["storm day"]
    both = combination_set("EN 1990", ["dead", "snow"], own=[own])
    assert names(both, "strength")[-1] == "storm day"


def test_unknown_set_and_category():
    with pytest.raises(CalcpackError) as caught:
        combination_set("EN 199", ["dead"])
    assert str(caught.value) == "basis.actions: no set of combinations 'EN 199'; did you mean 'EN 1990'?"
    with pytest.raises(CalcpackError) as caught:
        combination_set("EN 1990", ["dead", "live"], occupancy="Z")
    assert "no category 'Z'" in str(caught.value)
    with pytest.raises(CalcpackError):
        combination_set("job", ["dead"])


def test_every_shipped_set_reads():
    for name in set_names():
        if name != "job":
            found = combination_set(name, ["dead", "live", "roof_live", "snow"])
            assert {each.limit for each in found.combinations} == {"strength", "service"}
            assert all(each.cite for each in found.combinations)
