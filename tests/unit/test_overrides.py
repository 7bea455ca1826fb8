"""Named sets of conductivities, and values of the config in place of theirs."""

from typing import get_args

import numpy as np
import pytest

from basinheat.conductivity import catalogue
from basinheat.conductivity.conditions import LAW_NAMES
from basinheat.conductivity.overrides import load_overridden, overridden
from basinheat.errors import UserError
from basinheat.settings.files import catalogue_file, catalogue_sets
from basinheat.settings.heat import Conductivity, Law, Override
from basinheat.settings.load import load_config

ROCKS = catalogue.load()


def of(rocks, name):
    place = rocks.aliases[name]
    return {
        "k": rocks.conductivity_w_mk[place],
        "std": rocks.std_ln[place],
        "porosity": rocks.porosity_surface[place],
        "heat": rocks.heat_production_w_m3[place],
        "law": LAW_NAMES[rocks.law[place]],
    }


@pytest.mark.parametrize("name", catalogue.set_names())
def test_every_number_of_every_set_tells_its_source(name):
    rocks = catalogue.load(name)
    for rock, source in zip(rocks.names, rocks.sources, strict=True):
        assert source.startswith("k"), rock
        assert any(word in source for word in ("read", "common practice", "from memory")), rock
        assert "Heat" in source or "heat" in source, rock


def test_the_sets_are_those_the_settings_name():
    assert list(catalogue.set_names()) == catalogue_sets()
    assert Conductivity().catalogue in catalogue_sets()
    words = Conductivity.model_fields["catalogue"].description
    assert all(name in words for name in catalogue_sets())
    assert catalogue.set_file("beardsmore2001").samefile(catalogue_file("beardsmore2001"))
    assert catalogue_file("own/rocks.csv") == "own/rocks.csv"


def test_laws_of_the_settings_are_those_of_the_catalogue():
    assert get_args(Law) == LAW_NAMES


def test_sets_hold_the_same_rocks_so_that_either_can_be_chosen():
    low = catalogue.load("midcontinent_lowshale")
    assert set(ROCKS.aliases) <= set(low.aliases)


def test_shales_of_the_low_set_are_within_what_was_read():
    """Blackwell & Steele (1989), whole rock at 20 degC, read in Wangen (2010), table 2.2."""
    low = catalogue.load("midcontinent_lowshale")
    for name, (least, most) in {
        "claystone": (0.80, 1.25),
        "siltstone": (0.80, 1.25),
        "shale": (1.05, 1.45),
        "sand": (1.70, 2.50),
        "sandstone": (2.50, 4.20),
    }.items():
        rock = of(low, name)
        assert rock["porosity"] == 0.0, "whole rock"
        assert least < rock["k"] < most
        # one sigma reaches about to the ends of the range that was read
        assert rock["std"] == pytest.approx(0.5 * np.log(most / least), rel=0.35)


def test_what_the_config_states_counts_and_the_rest_stays():
    rocks = overridden(ROCKS, {"Rock Salt": {"conductivity_w_mk": 6.1, "std_ln": None}})
    assert of(rocks, "halite") == {**of(ROCKS, "halite"), "k": 6.1}
    assert of(rocks, "shale") == of(ROCKS, "shale")
    place = rocks.aliases["halite"]
    assert rocks.sources[place].startswith("Config: conductivity_w_mk. k: read")
    rocks = overridden(
        ROCKS, {"shale": {"law": "none", "heat_production_uw_m3": 2.5, "porosity_surface": 0.5}}
    )
    changed = {"law": "none", "heat": pytest.approx(2.5e-6), "porosity": 0.5}
    assert of(rocks, "shale") == {**of(ROCKS, "shale"), **changed}


def test_one_sigma_for_all_rock_gives_way_to_that_of_one():
    stated = {"std_ln": 0.3, "overrides": {"shale": {"std_ln": 0.08}}}
    rocks = load_overridden(None, stated)
    assert of(rocks, "shale")["std"] == 0.08
    assert of(rocks, "halite")["std"] == of(rocks, "granite")["std"] == 0.3


def test_a_formation_can_be_a_rock_of_its_own():
    rocks = overridden(ROCKS, {"Upper Clastics": {"conductivity_w_mk": 2.9, "std_ln": 0.05}})
    assert rocks.made == {"upper_clastics"}
    assert of(rocks, "upper_clastics")["k"] == 2.9
    assert of(rocks, "upper_clastics")["std"] == 0.05
    assert of(rocks, "upper_clastics")["porosity"] == 0.0
    assert len(rocks.names) == len(ROCKS.names) + 1 == len(rocks.anisotropy)


def test_a_rock_of_ones_own_needs_its_conductivity():
    with pytest.raises(UserError) as caught:
        load_overridden(None, {"overrides": {"shael": {"std_ln": 0.1}, "Blort": {"law": "none"}}})
    assert len(caught.value.faults) == 2
    assert "conductivity.overrides.shael" in str(caught.value)
    assert "the nearest is shale" in str(caught.value)


@pytest.mark.parametrize(
    "wrong", [{"conductivity_w_mk": 0.0}, {"porosity_surface": 1.2}, {"law": "x"}, {"k": 2.0}]
)
def test_values_that_can_not_be_are_refused(wrong):
    with pytest.raises(ValueError, match=next(iter(wrong))):
        Override(**wrong)


# --- what the config says of rock, before any job ---


def faults(tmp_path, **conductivity):
    """Return the faults of a config whose files are all there."""
    (tmp_path / "wells.csv").write_text("well,x,y\nA,500000,6000000\n")
    (tmp_path / "readings.csv").write_text("well,depth,temperature\nA,2000,70\n")
    config = {
        "run": "case",
        "crs": "EPSG:32631",
        "inputs": {"wells": [{"file": "wells.csv"}], "readings": [{"file": "readings.csv"}]},
        "conductivity": conductivity,
    }
    try:
        load_config(config, "config.yaml", tmp_path)
    except UserError as error:
        return error.faults
    return []


def test_settings_of_rock_that_fit_are_taken(tmp_path):
    (tmp_path / "f.csv").write_text("formation,lithology,percent\nUpper,sandstone,100\n")
    assert faults(tmp_path, formations="f.csv", catalogue="midcontinent_lowshale") == []
    assert faults(tmp_path, formations={"Upper": {"Salz": 1.0}}, lithologies={"Salz": "salt"}) == []
    stated = {"Upper": {"conductivity_w_mk": 2.0}}
    assert faults(tmp_path, overrides=stated, default_lithology="upper") == []


@pytest.mark.parametrize(
    ("conductivity", "said"),
    [
        ({"catalogue": "midcontinent"}, "a set of the program is beardsmore2001 or"),
        ({"formations": {"A": {"sandstone": 60}}}, "formations.A: the percentages sum to 60"),
        ({"formations": {"A": {"sandstone": -6}}}, "formations.A.sandstone: must be 0 or more"),
        ({"formations": 3}, "formations: must be a mapping"),
        ({"formations": "none.csv"}, "conductivity.formations: no file"),
        ({"overrides": {"blort": {"std_ln": 0.2}}}, "overrides.blort: is not in the catalogue"),
        ({"overrides": {"shale": {"conductivity": 2}}}, 'did you mean "conductivity_w_mk"?'),
        ({"default_lithology": "shael"}, "default_lithology"),
        ({"non_net_lithology": "sandstone/shale"}, "non_net_lithology"),
        ({"lithologies": {"x": "unobtainium"}}, "conductivity.lithologies.x"),
        ({"fluid_mixing": "geometrical"}, 'did you mean "geometric"?'),
    ],
)
def test_settings_of_rock_that_do_not_fit_are_told_before_any_job(tmp_path, conductivity, said):
    (told,) = faults(tmp_path, **conductivity)
    assert said in told
