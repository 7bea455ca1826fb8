"""Words for rock: lithologies, mixtures, formations; and what they do to resistances."""

from pathlib import Path

import numpy as np
import pandas as pd
import pytest
import yaml

from basinheat import ingest, tables
from basinheat.conductivity import catalogue, mixing, mixtures
from basinheat.conductivity.mixtures import UNCLEAR, UNKNOWN, Vocabulary, load_formations
from basinheat.errors import UserError
from basinheat.rock import resistances
from basinheat.settings.heat import Conductivity, HeatFlow
from basinheat.settings.load import load_config

ROCKS = catalogue.load()
FLOW = HeatFlow(regional_mw_m2=60.0)
FORMATIONS = {"Upper Clastics": {"sandstone": 60, "shale": 40}, "Chalk": {"chalk": 80, "marl": 20}}
WORDS = Vocabulary(ROCKS, {"Salz": "halite", "Ss-Sh": "sandstone 60 shale 40"}, FORMATIONS)


def named(word, words=WORDS):
    meaning = words.meaning(word)
    return {ROCKS.names[place]: pytest.approx(share) for place, share in meaning.shares}


@pytest.mark.parametrize(
    "word",
    [
        "sandstone 60 shale 40",
        "Sandstone 60%, Shale 40%",
        "60% sandstone, 40% shale",
        "60 sand and 40 shales",
        "shale (40 %) / sandstone (60 %)",
        "sandstone 0.6 shale 0.4",
        "shale:40;sandstone:60",
        "Ss Sh",
        "upper-clastics",
    ],
)
def test_a_mixture_is_read_however_it_is_written(word):
    assert named(word) == {"sandstone": 0.6, "shale": 0.4}


def test_names_of_several_words_and_decimals_are_read():
    assert named("rock salt 62,5 % black shale 37,5 %") == {"halite": 0.625, "shale": 0.375}
    assert named("sandstone 33 shale 33 marl 33") == dict.fromkeys(
        ("sandstone", "shale", "marl"), 1 / 3
    )
    assert named("Salz 90 anhydrite 10") == {"halite": 0.9, "anhydrite": 0.1}


def test_a_formation_goes_before_a_rock_of_its_name_but_is_made_of_the_rock():
    assert named("chalk") == {"chalk": 0.8, "marl": 0.2}
    assert named("chalk 50 marl 50") == {"chalk": 0.5, "marl": 0.5}


@pytest.mark.parametrize(
    ("word", "code", "said"),
    [
        (
            "sandstone/shale",
            UNCLEAR,
            'write such as "sandstone 50 shale 50"',
        ),
        ("sandstone and shale", UNCLEAR, "states no percentages"),
        ("sandstone 60 shale 20", UNCLEAR, "sum to 80, must be 100"),
        ("sandstone 70 shale", UNCLEAR, "no percentage for each rock"),
        ("60/40 sandstone/shale", UNCLEAR, "no percentage for each rock"),
        ("sandstone 60 unobtainium 40", UNKNOWN, '"unobtainium" is not in the catalogue'),
        ("sandstoen", UNKNOWN, "the nearest is sandstone"),
        ("uper clastics", UNKNOWN, "the nearest is upper_clastics"),
        ("Blort 2", UNKNOWN, "is not in the catalogue"),
    ],
)
def test_what_is_not_understood_is_told(word, code, said):
    meaning = WORDS.meaning(word)
    assert (meaning.shares, meaning.code) == ((), code)
    assert said in meaning.why


def test_faults_of_the_settings_are_told_at_once():
    with pytest.raises(UserError) as caught:
        Vocabulary(ROCKS, {"x": "shael"}, {"A": {"sandstone": 60}, "B": {"blort": 100}})
    text = str(caught.value)
    assert len(caught.value.faults) == 3
    assert "conductivity.formations.A: the percentages sum to 60" in text
    assert 'conductivity.formations.B: "blort" is not in the catalogue' in text
    assert 'conductivity.lithologies.x: "shael"' in text and "nearest is shale" in text


def test_formations_come_from_a_table(tmp_path):
    path = tmp_path / "formations.csv"
    path.write_text(
        "formation,lithology,percent\nUpper Clastics,sandstone,60\n"
        "Upper clastics,shale,40 %\nChalk,chalk,80\nChalk,marl,20\n"
    )
    assert load_formations(str(path)) == FORMATIONS
    assert load_formations(FORMATIONS) == FORMATIONS


@pytest.mark.parametrize(
    ("line", "words"),
    [
        ("Upper,sandstone,sixty", "line 3: percent"),
        ("Upper,sandstone,160", "line 3: percent"),
        ("Upper,Shale,10", 'line 3: "Upper" has "Shale" twice'),
        (",shale,10", "line 3: formation or lithology is blank"),
    ],
)
def test_a_faulty_table_of_formations_is_refused_with_its_line(tmp_path, line, words):
    path = tmp_path / "formations.csv"
    path.write_text(f"formation,lithology,percent\nUpper,shale,100\n{line}\n")
    with pytest.raises(UserError, match=words):
        load_formations(path)
    with pytest.raises(UserError, match="has no column lithology, percent"):
        path.write_text("formation\nUpper\n")
        load_formations(path)


# --- through the stage ---------------------------------------------------------------------------


@pytest.fixture(scope="module")
def basin():
    """A small basin: wells, layers, temperatures; every third well without layers."""
    rng = np.random.default_rng(5)
    names = ["shale", "sandstone", "halite", "limestone"]
    wells = pd.DataFrame(
        {
            "well": [f"W{i:02d}" for i in range(12)],
            "easting_m": rng.uniform(0, 5e4, 12),
            "northing_m": rng.uniform(0, 5e4, 12),
            "surface_temperature_degc": 10.0,
            "surface_temperature_std_k": 1.0,
        }
    )
    layers = []
    for i in range(12):
        if i % 3:
            cuts = np.r_[0.0, np.sort(rng.uniform(200, 2800, 3)).round(), 3000.0]
            layers += [(f"W{i:02d}", cuts[j], cuts[j + 1], names[j]) for j in range(4)]
    readings = [(f"W{i:02d}", z, 10 + 0.03 * z) for i in range(12) for z in (1400.0, 2700.0)]
    return (
        tables.Wells.conform(wells),
        tables.Layers.conform(
            pd.DataFrame(layers, columns=["well", "top_m", "base_m", "lithology"])
        ),
        tables.Estimates.conform(
            pd.DataFrame(readings, columns=["well", "depth_m", "temperature_degc"]).assign(
                temperature_std_k=4.0, used=True
            )
        ),
    )


def estimated(basin, layers=None, **settings):
    wells, own, estimates = basin
    layers = own if layers is None else layers
    return resistances.estimate(estimates, wells, layers, Conductivity(**settings), FLOW)


def assert_same(one, other):
    pd.testing.assert_frame_equal(one.resistances, other.resistances, check_exact=True)
    pd.testing.assert_frame_equal(one.structure, other.structure, check_exact=True)
    pd.testing.assert_frame_equal(one.sources, other.sources, check_exact=True)


@pytest.mark.parametrize("rule", ["harmonic", "geometric", "arithmetic"])
def test_a_hundred_percent_is_the_rock_itself(basin, rule):
    layers = basin[1]
    plain = estimated(basin, mixing={"beds": rule})
    wholly = layers.assign(lithology=layers["lithology"] + " 100 %")
    assert_same(plain, estimated(basin, wholly, mixing={"beds": rule}))
    tops = layers.assign(lithology="", formation="F-" + layers["lithology"])
    mixes = {f"F {name}": {name: 100} for name in set(layers["lithology"])}
    assert_same(plain, estimated(basin, tops, formations=mixes, mixing={"beds": rule}))
    assert_same(plain, estimated(basin, layers.assign(net_to_gross=1.0), mixing={"beds": rule}))


@pytest.mark.parametrize("rule", ["harmonic", "geometric", "arithmetic"])
def test_order_of_rows_columns_and_parts_does_not_matter(basin, rule):
    layers = basin[1].assign(lithology="sandstone 50 shale 30 marl 20")
    turned = layers.assign(lithology="20% marl, 30% shale, 50% sandstone")
    turned = turned.sample(frac=1.0, random_state=3)[[*reversed(turned.columns)]]
    one = estimated(basin, layers, mixing={"beds": rule})
    assert_same(one, estimated(basin, turned.reset_index(drop=True), mixing={"beds": rule}))


@pytest.mark.parametrize("rule", ["harmonic", "geometric", "arithmetic"])
def test_a_mixed_layer_conducts_by_the_rule(basin, rule):
    """Two rocks without pores at 25 degC: k of the layer is the mean of that name."""
    layers = basin[1].assign(lithology="halite 70 granite 30")
    out = estimated(basin, layers, mixing={"beds": rule}, temperature_law=False).resistances
    k = [ROCKS.conductivity_w_mk[ROCKS.names.index(name)] for name in ("halite", "granite")]
    expected = getattr(mixing, rule)([0.7, 0.3], k)
    own = out[out["well"] == "W01"]
    assert (own["depth_m"] / own["resistance_m2k_w"]).to_numpy() == pytest.approx(expected)


@pytest.mark.parametrize("rule", ["harmonic", "geometric", "arithmetic"])
def test_loadings_of_a_mixture_are_derivatives(basin, rule):
    """Resistance by lithology is what 1 % more conductivity of that lithology takes away."""
    settings = {"mixing": {"beds": rule}, "temperature_law": False}
    k = ROCKS.conductivity_w_mk[ROCKS.names.index("halite")]
    layers = basin[1].assign(lithology="halite 60 granite 40")
    base = estimated(basin, layers, **settings)
    own = base.resistances["well"] == "W01"
    more = {"halite": {"conductivity_w_mk": k * 1.0001}}
    moved = estimated(basin, layers, overrides=more, **settings)
    fall = base.resistances["resistance_m2k_w"] - moved.resistances["resistance_m2k_w"]
    part = base.resistances["resistance_halite"]
    assert (fall / 1e-4)[own].to_numpy() == pytest.approx(part[own].to_numpy(), rel=1e-3)
    total = base.resistances[["resistance_halite", "resistance_granite"]].sum(axis=1)
    assert total[own].to_numpy() == pytest.approx(base.resistances["resistance_m2k_w"][own])
    sigma = dict(zip(base.sources["source"], base.sources["prior_std"], strict=True))
    shares = sum(
        base.structure[f"loading_conductivity:{name}"] / sigma[f"conductivity:{name}"]
        for name in ("halite", "granite")
    )
    assert shares.to_numpy() == pytest.approx(1.0)


@pytest.mark.parametrize("rule", ["harmonic", "geometric", "arithmetic"])
def test_a_well_without_layers_is_taken_as_mixed_like_the_others(basin, rule):
    """All wells alike, some without layers: those have the resistance of the others."""
    layers = basin[1].assign(lithology="sandstone 50 shale 50")
    out = estimated(basin, layers, mixing={"beds": rule}, temperature_law=False).resistances
    by_origin = out[out["depth_m"] == 2700.0].groupby("origin")["resistance_m2k_w"].mean()
    # porosity is averaged over layers in the one and over slabs in the other
    assert by_origin["basin_mean"] == pytest.approx(by_origin["catalogue"], rel=2e-3)


def test_net_to_gross_leaves_the_rest_to_another_rock(basin):
    layers = basin[1].assign(lithology="sandstone", net_to_gross=0.25)
    stated = basin[1].assign(lithology="sandstone 25 marl 75")
    assert_same(estimated(basin, layers, non_net_lithology="marl"), estimated(basin, stated))


def test_heat_of_a_mixture_is_that_of_its_parts(basin):
    layers = basin[1].assign(lithology="granite 50 halite 50")
    out = estimated(basin, layers).structure
    heat = [ROCKS.heat_production_w_m3[ROCKS.names.index(n)] for n in ("granite", "halite")]
    assert out["heat_production_uw_m3"].to_numpy() == pytest.approx(np.mean(heat) * 1e6)


def test_formations_alone_are_enough_and_the_unknown_are_rows(basin):
    layers = basin[1].assign(lithology="", formation="Upper Clastics")
    layers.loc[3, "formation"] = "Uper Clastiks"
    layers.loc[5, "formation"], layers.loc[5, "lithology"] = "Upper Clastics", "sandstone/shale"
    rocks = estimated(basin, layers, formations=FORMATIONS)
    assert rocks.rejected["code"].tolist() == ["lithology_unknown", "mixture_unclear"]
    assert "the nearest is upper_clastics" in rocks.rejected["sentence"][0]
    assert "conductivity.formations" in rocks.rejected["sentence"][0]
    assert "states no percentages" in rocks.rejected["sentence"][1]
    assert rocks.resistances["resistance_sandstone"].gt(0.0).all()


def test_settings_name_one_rock(basin):
    with pytest.raises(UserError, match=r"default_lithology.*is a mixture"):
        estimated(basin, default_lithology="sandstone 50 shale 50")
    with pytest.raises(UserError, match=r"non_net_lithology.*nearest is shale"):
        estimated(basin, basin[1].assign(net_to_gross=0.5), non_net_lithology="shael")


def test_the_cells_of_a_page_of_cuttings_are_read_once_each():
    assert mixtures._pairs("10 coal 20 marl 70 shale") == [
        ("coal", 10.0),
        ("marl", 20.0),
        ("shale", 70.0),
    ]


def test_an_invented_basin_told_in_formations_is_the_same_basin():
    """The demo's layers, cores and gaps among them; once by lithology, once by formation."""
    folder = Path(__file__).parents[2] / "config"
    raw = yaml.safe_load((folder / "config.yaml").read_text(encoding="utf-8"))
    settings = load_config(raw, "config.yaml", folder)["base"]
    made = ingest.prepare(settings, folder)
    wells = made.wells.assign(surface_temperature_degc=10.0, surface_temperature_std_k=1.0)
    read = made.readings[["well", "depth_m"]]
    read = read.assign(temperature_degc=10.0 + 0.03 * read["depth_m"], temperature_std_k=4.0)
    basin = (
        tables.Wells.conform(wells),
        made.layers,
        tables.Estimates.conform(read.assign(used=True)),
    )
    plain = estimated(basin, lithologies={"salt": "halite"})
    named = made.layers["lithology"]
    assert named.nunique() >= 6 and made.layers["conductivity_w_mk"].notna().any()
    known = [name for name in named.unique() if name and not WORDS.meaning(name).code]
    mixes = {f"Fm {name}": {name: 100} for name in known}
    told = made.layers.assign(
        lithology="", formation=[f"Fm {name}" if name else "" for name in named]
    )
    told = told.sample(frac=1.0, random_state=1).reset_index(drop=True)
    assert_same(plain, estimated(basin, told, formations=mixes))
