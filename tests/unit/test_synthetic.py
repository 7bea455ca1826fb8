"""The invented basin is what it says: physics, statistics, paperwork, dirt, bytes."""

from pathlib import Path

import numpy as np
import pandas as pd
import pytest
from pyproj import Transformer
from scipy.integrate import solve_ivp

from basinheat.conductivity import catalogue
from basinheat.settings.model import Settings
from basinheat.synthetic import DEMO_SEED, Truth, make_basin, write_demo
from basinheat.synthetic.conduction import conduct_down
from basinheat.synthetic.fields import Field
from basinheat.synthetic.files import config_text
from basinheat.synthetic.geography import EAST, NORTH, SOUTH, WEST
from basinheat.synthetic.mud import cooling_left
from basinheat.synthetic.rocks import ORDINARY

DEMO = Path(__file__).parents[2] / "config" / "demo"
A, KAPPA = 0.108, 1e-6


@pytest.fixture(scope="module")
def clean():
    return make_basin(1, n_wells=200, hard=False, dirt=False)


@pytest.fixture(scope="module")
def demo():
    return make_basin(DEMO_SEED)


def column(conductivity, depth_m, flow, surface, heat=0.0):
    nodes = np.array([[depth_m]])
    production = np.full(nodes.shape, heat)
    return conduct_down(np.array([surface]), np.array([flow]), nodes, conductivity, production)[
        0, 0
    ]


def test_column_of_one_rock_with_heat_production():
    # T = T0 + q0 z / k - A z^2 / 2k (Carslaw & Jaeger 1959): 150 degC at 5628.2896 m.
    degc = column(lambda j, z, t: np.full(z.shape, 2.5), 5628.2896, 0.065, 10.0, 1e-6)
    assert degc == pytest.approx(150.0, abs=1e-5)


def test_column_whose_conductivity_falls_with_temperature():
    # k = k0 / (1 + b T): ln((1 + b T) / (1 + b T0)) = b (q0 z - A z^2 / 2) / k0, by hand.
    k0, b, z = 3.0, 1.5e-3, 5000.0
    degc = column(lambda j, d, t: k0 / (1 + b * t), z, 0.065, 10.0, 1e-6)
    shape = np.exp(b * (0.065 * z - 1e-6 * z**2 / 2) / k0)
    assert degc == pytest.approx(((1 + b * 10.0) * shape - 1) / b, abs=1e-5)


def test_column_whose_conductivity_rises_with_depth_too():
    # k = k0 (1 + c z) / (1 + b T), Chapman (1986), its integral by hand; the lower crust.
    k0, b, c, z, q, heat = 3.0, 1.5e-3, 1.5e-6, 20_000.0, 0.065, 1e-6
    degc = column(lambda j, d, t: k0 * (1 + c * d) / (1 + b * t), z, q, 10.0, heat)
    integral = (q + heat / c) * np.log1p(c * z) / c - heat * z / c
    assert degc == pytest.approx(((1 + b * 10) * np.exp(b * integral / k0) - 1) / b, abs=1e-4)


def test_column_of_layers_with_heat_production():
    # Layer by layer, T += q h / k - A h^2 / 2k and q -= A h, by hand.
    thick, k = np.array([500.0, 400.0, 600.0, 500.0]), np.array([1.8, 2.5, 3.1, 2.2])
    heat = np.array([1.2, 1.0, 0.6, 1.5]) * 1e-6
    expected, t, q = [], 12.0, 0.065
    for h, ki, ai in zip(thick, k, heat, strict=True):
        t, q = t + q * h / ki - ai * h**2 / (2 * ki), q - ai * h
        expected.append(t)
    got = conduct_down(
        np.array([12.0]),
        np.array([0.065]),
        np.cumsum(thick)[None],
        lambda j, z, degc: np.full(z.shape, k[j]),
        heat[None],
    )
    assert got[0] == pytest.approx(expected, abs=1e-9)


@pytest.mark.parametrize(
    ("circulation", "since", "left"),
    # An independent finite-volume experiment of the project's method notes: hole of 0.108 m,
    # 1e-6 m2/s, mud like rock; its share recovered on the axis, to half a per cent.
    [(4, 6, 0.60616), (4, 12, 0.76035), (24, 6, 0.43207), (24, 24, 0.72620), (4, 48, 0.92809)],
)
def test_recovery_against_another_simulation(circulation, since, left):
    got = 1 - cooling_left(np.array([circulation]), np.array([since]), np.array([A]), KAPPA)
    assert got[0] == pytest.approx(left, rel=0.005)


@pytest.mark.parametrize(("circulation", "left"), [(4, 0.75050), (24, 0.54891)])
def test_recovery_of_the_bare_wall(circulation, left):
    # The same experiment without heat capacity of the mud, 6 h after circulation.
    got = cooling_left(np.array([circulation]), np.array([6.0]), np.array([A]), KAPPA, 1e-5)
    assert 1 - got[0] == pytest.approx(left, rel=0.005)


def test_recovery_from_a_moment_of_circulation():
    # A cylinder of cold in rock like it: 1 - exp(-a^2 / 4 kappa t) is left on its axis
    # (Carslaw & Jaeger 1959, section 10.3, at r = 0).
    since = np.array([1.0, 2.0, 5.0, 20.0])
    got = cooling_left(np.full(4, 1e-7), since, np.full(4, A), KAPPA)
    expected = 1 - np.exp(-(A**2) / (4 * KAPPA * since * 3600))
    assert got == pytest.approx(expected, rel=0.005)


def test_recovery_knows_no_scale_and_runs_the_right_way():
    one, size = np.ones(1), np.array([A])
    times = np.array([1.0, 3.0, 9.0, 27.0])
    same = [cooling_left(4 * one * s**2, 9 * one * s**2, size * s, KAPPA)[0] for s in (1, 2)]
    assert same[0] == pytest.approx(same[1], rel=1e-9)
    later = cooling_left(np.full(4, 4.0), times, np.full(4, A), KAPPA, 1.6, 0.3)
    longer = cooling_left(times, np.full(4, 6.0), np.full(4, A), KAPPA, 1.6, 0.3)
    assert (np.diff(later) < 0).all() and (np.diff(longer) > 0).all()
    assert ((later > 0) & (later < 1)).all()
    heavy = cooling_left(4 * one, 9 * one, size, KAPPA, 1.8, 0.3)
    assert heavy > cooling_left(4 * one, 9 * one, size, KAPPA, 1.3, 0.3)


def test_fields_have_the_covariance_they_state():
    # Matern 1.5: 5 % at the practical range, (1 + x) exp(-x) with x = sqrt(3) h / length.
    rng = np.random.default_rng(4)
    distance = np.array([0.0, 20_000.0, 50_000.0, 100_000.0])
    draws = np.array(
        [
            Field.draw(rng, 2.0, 100_000.0).at(4e5 + distance, 7e6 + distance * 0)
            for _ in range(2500)
        ]
    )
    x = 4.743864518 * distance / 100_000.0
    expected = (1 + x) * np.exp(-x)
    covariance = (draws[:, :1] * draws).mean(axis=0) / 4.0
    assert expected[-1] == pytest.approx(0.05, abs=1e-6)
    assert covariance == pytest.approx(expected, abs=4 / np.sqrt(2500))
    assert draws.mean(axis=0) == pytest.approx(0.0, abs=4 * 2.0 / np.sqrt(2500))


def test_truth_against_an_adaptive_integrator(demo):
    # scipy's solver as an independent integrator of the same column.
    truth = demo.truth
    east, north = demo.wells.easting_m.to_numpy()[:3], demo.wells.northing_m.to_numpy()[:3]
    got = truth.temperature_degc(east, north, [700.0, 3900.0])
    bases, factors = truth.geology.bases_m(east, north), truth.geology.factors(east, north)
    rocks, of_layer = truth.geology.rocks, truth.geology.rock_of_layer
    for i in range(3):

        def rise(z, state, i=i):
            rock = of_layer[[int((z >= bases[i]).sum())]]
            k = rocks.conductivity(rock, np.array([z]), state[:1], factors[i, rock])[0]
            return [state[1] / k, -rocks.production_w_m3[rock[0]]]

        start = [
            truth.surface_temperature_degc(east, north)[i],
            truth.heat_flow_mw_m2(east, north)[i] / 1000,
        ]
        solved = solve_ivp(rise, (0, 3900), start, t_eval=[700, 3900], max_step=5.0, rtol=1e-7)
        assert got[i] == pytest.approx(solved.y[0], abs=0.05)


def test_truth_agrees_with_itself(demo):
    truth = demo.truth
    east, north = demo.wells.easting_m.to_numpy()[:40], demo.wells.northing_m.to_numpy()[:40]
    surface = truth.surface_temperature_degc(east, north)
    column_ = truth.temperature_degc(east, north, np.arange(0.0, 5001.0, 500.0))
    assert column_[:, 0] == pytest.approx(surface)
    assert (np.diff(column_, axis=1) > 0).all()
    depth = truth.isotherm_depth_m(east, north, 100.0)
    back = truth.temperature_degc(east, north, depth[:, None])
    assert back[:, 0] == pytest.approx(100.0, abs=0.01)
    gradient = truth.gradient_k_km(east, north, 2000.0)
    assert gradient == pytest.approx((column_[:, 4] - surface) / 2.0)
    assert np.isnan(truth.isotherm_depth_m(east, north, 150.0, deepest_m=1000.0)).all()


def test_rocks_are_ordinary():
    known = catalogue.load()
    for name, (matrix, porosity, _, heat) in ORDINARY.items():
        i = known.places([name], {})[name]
        assert matrix == pytest.approx(known.conductivity_w_mk[i], rel=0.15)
        assert porosity == pytest.approx(known.porosity_surface[i], abs=0.05)
        assert heat * 1e-6 == pytest.approx(known.heat_production_w_m3[i], rel=0.2, abs=1e-7)


def test_basins_are_plausible():
    # Wide brackets of ordinary sedimentary basins (common practice, no source).
    place = [
        a.ravel() for a in np.meshgrid(np.linspace(WEST, EAST, 12), np.linspace(SOUTH, NORTH, 9))
    ]
    flows, deep = [], []
    for seed in range(12):
        truth = Truth.draw(np.random.default_rng(seed))
        flows.append(truth.heat_flow_mw_m2(*place))
        deep.append(truth.temperature_degc(*place, 3000.0)[:, 0])
    assert 50 < np.mean(flows) < 75
    assert 3 < np.median(np.std(flows, axis=1)) < 12
    assert 85 < np.median(deep) < 130


def test_the_demo_is_as_described(demo):
    wells, sets = demo.wells, demo.sets
    sea = wells.water_depth_m > 0
    assert sea.sum() == 25
    assert wells.water_depth_m[sea].between(20, 300).all()
    assert wells.ground_elevation_m[~sea].between(0, 650).all()
    assert wells.depth_m.between(800, 4200).all()
    assert wells.depth_m.between(1500, 3500).mean() > 0.7
    logs = sets[sets.kind == "LOG"]
    assert 0.65 < logs.timed.mean() < 0.85
    assert sets[sets.kind == "STATIC"]["well"].nunique() == 18
    assert sets[sets.kind == "DST"]["well"].nunique() == 30
    assert (logs.runs > 1).sum() > 100
    no_layers = 1 - demo.tables["layers"].API.nunique() / len(wells)
    assert 0.06 < no_layers < 0.18
    assert {"salt", "shale", "sandstone"} <= set(demo.tables["layers"].LITH)
    deep = demo.truth.temperature_degc(wells.easting_m, wells.northing_m, 3000.0)[:, 0]
    assert np.percentile(deep, 10) > 80 and np.percentile(deep, 90) < 130


def test_mud_cools(demo):
    log = demo.felt["circulation_h"].notna().to_numpy()
    formation = demo.sets.temperature_degc.to_numpy()[demo.felt["set"]]
    deficit = formation - demo.felt.felt_degc
    assert (deficit[log] > 0).all() and (deficit[~log] == 0).all()
    assert (deficit <= demo.felt.cooling_k).all()
    # A later run of a set is warmer.
    rise = demo.felt[log].groupby("set").felt_degc.diff().dropna()
    assert (rise > 0).all() and len(rise) > 100


def test_paper_leads_back_to_the_truth(clean):
    """Feet, degF and degrees, read back, are the true metres, degC and coordinates."""
    wells, papers = clean.wells, clean.tables["wells"]
    to_map = Transformer.from_crs("EPSG:4326", "EPSG:32631", always_xy=True)
    east, north = to_map.transform(papers.LONG.astype(float), papers.LAT.astype(float))
    assert np.asarray(east) == pytest.approx(wells.easting_m.to_numpy(), abs=0.1)
    assert np.asarray(north) == pytest.approx(wells.northing_m.to_numpy(), abs=0.1)
    ground = pd.to_numeric(papers.GL_FT).fillna(0) - pd.to_numeric(papers.WD_FT).fillna(0)
    assert (ground * 0.3048).to_numpy() == pytest.approx(wells.ground_elevation_m, abs=0.16)
    notes, index = clean.tables["readings"], clean.felt["set"].to_numpy()
    assert len(notes) == len(clean.felt)
    depth = pd.to_numeric(notes.DEPTH_FT) * 0.3048
    assert depth.to_numpy() == pytest.approx(clean.sets.measured_depth_m.to_numpy()[index], abs=2)
    error = (pd.to_numeric(notes.BHT_F) - 32) / 1.8 - clean.felt.felt_degc
    log = (notes.SOURCE == "LOG").to_numpy()
    # 0.8 K of the thermometer and 1/sqrt(12) degF of rounding.
    assert error[log].std() == pytest.approx(np.hypot(0.8, 1 / 1.8 / np.sqrt(12)), rel=0.1)
    assert error[log].mean() == pytest.approx(0.0, abs=0.12)
    timed = notes.TSC_H != ""
    since = pd.to_numeric(notes.TSC_H[timed])
    assert since.to_numpy() == pytest.approx(clean.felt.since_h[timed].to_numpy(), abs=0.126)


def test_surveys_lead_to_the_vertical_depth(clean):
    """Minimum curvature (Taylor & Mason 1972) along the survey gives the depth of the readings."""
    surveys = clean.tables["surveys"].set_index("API").astype(float)
    sets = clean.sets.merge(clean.wells, on="well", suffixes=("", "_bottom"))
    checked = 0
    for name, path in surveys.groupby(level=0):
        md, angle = path.DEPTH_FT.to_numpy() * 0.3048, np.radians(path.INCL.to_numpy())
        turn = np.abs(np.diff(angle))
        factor = np.where(turn > 1e-6, 2 / np.maximum(turn, 1e-9) * np.tan(turn / 2), 1.0)
        fall = np.diff(md) * (np.cos(angle[1:]) + np.cos(angle[:-1])) / 2 * factor
        vertical = np.concatenate([[0.0], np.cumsum(fall)])
        for row in sets[sets["well"] == name].itertuples():
            if row.measured_depth_m < md[-2]:
                continue
            got = np.interp(row.measured_depth_m, md, vertical)
            got -= row.datum_elevation_m - row.ground_elevation_m
            assert got == pytest.approx(row.depth_m, abs=0.3)
            checked += 1
    assert checked > 5


def test_layers_cover_the_well_without_gaps(clean):
    layers = clean.tables["layers"]
    feet = layers[["TOP_FT", "BASE_FT"]].astype(float)
    assert (feet.BASE_FT > feet.TOP_FT).all()
    for name, part in feet.groupby(layers.API):
        assert (part.TOP_FT.to_numpy()[1:] == part.BASE_FT.to_numpy()[:-1]).all()
        papers = clean.tables["wells"].set_index("API").loc[name]
        assert float(papers.TD_FT) == part.BASE_FT.max()
    measured = layers[layers.COND_WMK != ""]
    assert measured.API.nunique() == 5 and (measured.PHI != "").all()


def test_dirt_does_not_change_what_is_true(demo):
    other = make_basin(DEMO_SEED, dirt=False)
    pd.testing.assert_frame_equal(demo.sets, other.sets)
    assert other.dirt.empty
    spoiled = set(demo.dirt["well"]) | {" ".join(w.split()) for w in demo.dirt["well"]}
    before = other.tables["readings"].merge(demo.tables["readings"], how="left", indicator=True)
    changed = set(before[before["_merge"] == "left_only"].API)
    awkward = demo.dirt[demo.dirt.code == "awkward_name"].line.iloc[0]
    old_name = "BW-" + str(awkward - 1 - _added_above(demo, awkward)).zfill(4)
    assert changed <= spoiled | {old_name}


def _added_above(basin, line):
    added = basin.dirt[basin.dirt.code.isin(["well_twice_nearby", "well_twice_far"])]
    return int((added.line < line).sum())


def test_every_kind_of_dirt_is_there_and_where_the_list_says(demo):
    expected = {
        "celsius_in_fahrenheit_column", "metres_in_feet_column", "text_in_number",
        "negative_depth", "below_surface_temperature", "blank_temperature", "missing_code",
        "deeper_than_total_depth", "too_hot", "well_name_padded", "zero_time",
        "missing_word_in_time",
        "blank_time", "copied_reading", "duplicate_row", "unknown_well", "unknown_lithology",
        "base_above_top", "well_twice_nearby", "well_twice_far", "longitude_latitude_swapped",
        "missing_datum", "blank_coordinate", "awkward_name", "survey_lost", "missing_word",
        "approximate_number",
    }  # fmt: skip
    assert set(demo.dirt.code) == expected
    assert set(demo.dirt.expected) == {"rejected", "merged", "noticed", "kept"}
    for row in demo.dirt.itertuples():
        line = demo.tables[row.table].iloc[row.line - 2]
        assert line["API"] == row.well
        if row.column:
            assert line[row.column] == row.value
    duplicate = demo.dirt[demo.dirt.code == "duplicate_row"].line.iloc[0] - 2
    pair = demo.tables["readings"].iloc[duplicate - 1 : duplicate + 1]
    assert pair.duplicated().sum() == 1


def test_the_same_seed_writes_the_same_bytes(tmp_path):
    for folder in ("one", "two"):
        make_basin(5, n_wells=40).write(tmp_path / folder, run="same")
    make_basin(6, n_wells=40).write(tmp_path / "other", run="same")
    names = sorted(path.name for path in (tmp_path / "one").iterdir())
    assert len(names) == 7
    for name in names:
        first = (tmp_path / "one" / name).read_bytes()
        assert first == (tmp_path / "two" / name).read_bytes()
        if name != "config.yaml":
            assert first != (tmp_path / "other" / name).read_bytes()


def test_the_config_is_valid():
    yaml = pytest.importorskip("yaml")
    settings = Settings(**yaml.safe_load(config_text(run="some_run", folder="in/")))
    assert settings.run == "some_run"
    assert settings.inputs.layers[0].file == "in/layers.csv"
    assert settings.maps.depths_m == [1000.0, 2000.0, 3000.0]


def test_the_committed_demo_is_what_the_code_makes(tmp_path):
    """Equal up to a last digit here and there: processors round sums differently."""
    write_demo(tmp_path)
    assert sum(path.stat().st_size for path in DEMO.iterdir()) < 400_000
    for name in ("wells", "readings", "layers", "surveys", "dirt"):
        made = pd.read_csv(tmp_path / f"{name}.csv", dtype=str, keep_default_na=False)
        kept = pd.read_csv(DEMO / f"{name}.csv", dtype=str, keep_default_na=False)
        assert list(made) == list(kept) and len(made) == len(kept)
        differs = (made != kept).to_numpy()
        assert differs.mean() < 0.002
        for row, col in zip(*np.nonzero(differs), strict=True):
            # Operators who round to 5 degF make the largest step.
            step = 5.0 if list(made)[col] in ("BHT_F", "value") else 1.0
            assert abs(float(made.iloc[row, col]) - float(kept.iloc[row, col])) <= step


def test_topography_shows_the_wells_on_their_side_of_the_shore(demo):
    rasterio = pytest.importorskip("rasterio")
    with rasterio.open(DEMO / "topography.tif") as raster:
        assert raster.crs.to_epsg() == 32631
        places = zip(demo.wells.easting_m, demo.wells.northing_m, strict=True)
        seen = np.array([value[0] for value in raster.sample(places)], float)
    truth = demo.wells.ground_elevation_m.to_numpy()
    inland = np.abs(demo.truth.geography.inland_m(demo.wells.easting_m, demo.wells.northing_m))
    assert ((seen > 0) == (truth > 0))[inland > 2_000.0].all()
    assert np.abs(seen - truth)[inland > 2_000.0].max() < 25.0
