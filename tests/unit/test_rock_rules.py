"""How conductivities combine and change in the columns: pores, laws, pressure, dip, overrides."""

import numpy as np
import pandas as pd
import pytest

from basinheat import tables
from basinheat.conductivity import catalogue, conditions
from basinheat.rock import resistances
from basinheat.settings.heat import BelowLayers, Conductivity, HeatFlow

WELLS = tables.Wells.conform(
    pd.DataFrame(
        {
            "well": [f"W{i}" for i in range(6)],
            "easting_m": np.arange(6) * 7e3,
            "northing_m": np.arange(6) ** 2 * 1e3,
            "surface_temperature_degc": 10.0,
            "surface_temperature_std_k": 1.0,
        }
    )
)
ESTIMATES = tables.Estimates.conform(
    pd.DataFrame(
        [(well, z, 10 + 0.03 * z) for well in WELLS["well"] for z in (1000.0, 3000.0)],
        columns=["well", "depth_m", "temperature_degc"],
    ).assign(temperature_std_k=4.0, used=True)
)


def resistance(lithology, layers=None, **settings):
    """Resistance above 1 and 3 km of one rock from the surface down, m2 K/W."""
    frame = pd.DataFrame({"well": WELLS["well"], "top_m": 0.0, "base_m": 3000.0})
    frame = tables.Layers.conform(frame.assign(lithology=lithology, **(layers or {})))
    settings = Conductivity(**settings)
    out = resistances.estimate(ESTIMATES, WELLS, frame, settings, HeatFlow(regional_mw_m2=60.0))
    return out.resistances["resistance_m2k_w"].to_numpy()[:2], out


def test_mixing_of_matrix_and_water_is_in_order():
    """Wiener and Hashin-Shtrikman (1962) bounds: series, lower, upper, parallel."""
    rules = ["harmonic", "hashin_shtrikman_lower", "hashin_shtrikman_upper", "arithmetic"]
    found = [resistance("shale", fluid_mixing=rule)[0] for rule in rules]
    assert np.all(np.diff(found, axis=0) < 0.0)
    for rule in ("geometric", "square_root"):
        between = resistance("shale", fluid_mixing=rule)[0]
        assert np.all((between < found[0]) & (between > found[-1]))


@pytest.mark.parametrize("rule", ["geometric", "hashin_shtrikman_lower", "harmonic"])
def test_rock_without_pores_is_the_matrix_whatever_the_mixing(rule):
    found, _ = resistance("sandstone", {"porosity": 0.0}, fluid_mixing=rule, temperature_law=False)
    assert found == pytest.approx(np.array([1000.0, 3000.0]) / 4.5)


def test_laws_of_a_class_can_be_changed():
    cold = resistance("shale", {"porosity": 0.0}, temperature_law=False)[0]
    none = resistance("shale", {"porosity": 0.0}, laws={"sedimentary": "none"})[0]
    assert none == pytest.approx(cold)
    strong = resistance("sandstone", laws={"sedimentary": "chapman1984"})[0]
    weak = resistance("sandstone", laws={"sedimentary": "sekiguchi1984"})[0]
    usual = resistance("sandstone")[0]
    assert strong[1] > usual[1] > weak[1]  # METHODS E6: k(100 degC) for 3: 2.357, 2.606, 2.690
    assert resistance("halite", laws={"sedimentary": "none"})[0] == pytest.approx(
        resistance("halite")[0]
    )
    one = resistance("shale", overrides={"shale": {"law": "none", "porosity_surface": 0.0}})[0]
    assert one == pytest.approx(cold)


def test_rock_below_the_layers_follows_the_law_of_sediments():
    rock = {"below_layers": BelowLayers(conductivity_w_mk=4.0), "interval_m": 250.0}
    shallow = {"base_m": 250.0}
    assert (
        resistance("shale", shallow, **rock, laws={"sedimentary": "none"})[0][1]
        < (resistance("shale", shallow, **rock)[0][1])
    )


def test_pressure_makes_sediments_conduct_better_and_leaves_the_rest():
    usual, pressed = (
        resistance("sandstone")[0],
        resistance("sandstone", pressure="fuchs_foerster2014")[0],
    )
    gain = usual / pressed - 1.0
    assert 0.0 < gain[0] < gain[1] < 0.12  # METHODS E7: 8 % at 30 MPa, here 39 MPa at the bottom
    for rock in ("halite", "granite", "coal"):
        assert resistance(rock, pressure="fuchs_foerster2014")[0] == pytest.approx(
            resistance(rock)[0]
        )


def test_bedding_counts_where_it_dips():
    steep, uneven = {"dip_deg": 90.0}, {"overrides": {"shale": {"anisotropy": 1.5}}}
    usual = resistance("shale")[0]
    cold = {"temperature_law": False}
    assert resistance("shale", **uneven)[0] == pytest.approx(usual)
    assert resistance("shale", steep)[0] == pytest.approx(usual)
    upright = resistance("shale", steep, **uneven, **cold)[0]
    assert upright == pytest.approx(resistance("shale", **cold)[0] / 1.5)
    tilted = resistance("shale", {"dip_deg": 30.0}, **uneven, **cold)[0]
    flat = resistance("shale", **cold)[0]
    assert tilted == pytest.approx(flat / conditions.tilted(30.0, 1.5))


def test_what_was_measured_goes_before_every_setting():
    core = {"conductivity_w_mk": 2.0, "conductivity_std_w_mk": 0.1}
    settings = {
        "overrides": {"shale": {"conductivity_w_mk": 3.0, "anisotropy": 2.0}},
        "fluid_mixing": "harmonic",
        "temperature_law": False,
        "well_std_ln": 0.0,
    }
    found, out = resistance("shale", core | {"dip_deg": 45.0}, **settings)
    assert found == pytest.approx([500.0, 1500.0])
    std = out.resistances["resistance_std_m2k_w"].to_numpy()[:2]
    assert std == pytest.approx([0.05 * 500.0, 0.05 * 1500.0])
    mixed, _ = resistance("sandstone 60 shale 40", core, **settings)
    assert mixed == pytest.approx([500.0, 1500.0])


def test_a_formation_of_its_own_has_a_source_of_its_own():
    stated = {"conductivity_w_mk": 2.5, "std_ln": 0.04}
    found, out = resistance(
        "",
        {"formation": "Upper Clastics"},
        formations={"Upper Clastics": {"sandstone": 60, "shale": 40}},
        overrides={"Upper clastics": stated},
        temperature_law=False,
    )
    assert found == pytest.approx([400.0, 1200.0])
    sources = out.sources.set_index("source")["prior_std"]
    assert sources["conductivity:upper_clastics"] == 0.04
    assert "conductivity:shale" not in sources


def test_the_low_shale_set_lowers_clay_rich_rock_and_nothing_else():
    """Field-calibrated shales, METHODS E1: whole rock, so that no compaction raises them at depth.

    Blackwell & Steele (1989), read in Wangen (2010): shale 1.05-1.45 W/(m K), claystone 0.8-1.25.
    """
    between = {}
    for name in catalogue.set_names():
        for rock in ("shale", "claystone", "dolomite", "halite"):
            upper, lower = resistance(rock, catalogue=name)[0]
            between[name, rock] = 2000.0 / (lower - upper)  # mean k from 1 to 3 km
    low, usual = "midcontinent_lowshale", "beardsmore2001"
    assert 1.05 < between[low, "shale"] < 1.45 < between[usual, "shale"]
    assert 0.80 < between[low, "claystone"] < 1.25 < between[usual, "claystone"]
    for rock in ("dolomite", "halite"):
        assert between[low, rock] == pytest.approx(between[usual, rock])


def test_mixtures_of_every_rock_can_be_mapped_with_either_set():
    for name in catalogue.set_names():
        rocks = catalogue.load(name).names
        mixed = " ".join(f"{rock} {100 / len(rocks):.4f}" for rock in rocks)
        assert np.all(resistance(mixed, catalogue=name)[0] > 0.0)
