"""The config: complete settings per scenario, and the documents made from the models."""

import copy
import itertools
import os
from pathlib import Path

import pytest
import yaml
from pydantic import ValidationError

from basinheat import documents
from basinheat.errors import UserError
from basinheat.screening.codes import READINGS, WELLS
from basinheat.settings import document
from basinheat.settings.columns import INPUT_COLUMNS, ONE_OF
from basinheat.settings.files import input_files, input_tables, nearby, with_paths
from basinheat.settings.load import OVERLAID, load_config, merged
from basinheat.settings.model import Settings
from basinheat.settings.wells import Screening

ROOT = Path(__file__).parents[2]
DEMO = ROOT / "config" / "config.yaml"

SMALLEST = {
    "run": "small",
    "crs": "EPSG:32631",
    "inputs": {"wells": [{"file": "wells.csv"}], "readings": [{"file": "readings.csv"}]},
}


@pytest.fixture
def folder(tmp_path):
    """Return a folder with the smallest inputs."""
    (tmp_path / "wells.csv").write_text("well,x,y\nA,500000,6000000\n", encoding="utf-8")
    (tmp_path / "readings.csv").write_text("well,depth,temperature\nA,1000,40\n", encoding="utf-8")
    return tmp_path


def load(folder, **changes):
    """Return the settings of the smallest config with sections laid over it."""
    return load_config(merged(copy.deepcopy(SMALLEST), changes), "my.yaml", folder)


def test_four_keys_are_enough(folder):
    settings = load(folder)
    assert list(settings) == ["base"]
    assert settings["base"].correction.order[0] == "equilibrium"
    assert settings["base"].surface_temperature.model == "linear"


def test_the_demo_is_valid():
    raw = yaml.safe_load(DEMO.read_text(encoding="utf-8"))
    settings = load_config(raw, "config/config.yaml", DEMO.parent)
    assert list(settings) == ["base"], "the demo has no scenario but base"
    assert settings["base"].maps.depths_m == [1000.0, 2000.0, 3000.0]


def test_settings_cannot_be_changed(folder):
    with pytest.raises(ValidationError, match="frozen"):
        load(folder)["base"].seed = 2


def test_an_empty_section_means_its_defaults(folder):
    assert load(folder, correction=None, kriging={"variogram": None}) == load(folder)


def test_strings_from_the_command_line_become_numbers(folder):
    settings = load(folder, seed="3", maps={"cell_size_m": "2000", "depths_m": ["500"]})["base"]
    assert (settings.seed, settings.maps.cell_size_m, settings.maps.depths_m) == (
        3,
        2000.0,
        [500.0],
    )


def test_a_scenario_merges_mappings_and_replaces_lists(folder):
    settings = load(
        folder,
        correction={"order": ["dst", "harrison1983"], "same_depth_m": 20},
        scenarios={"other": {"correction": {"order": ["horner"]}, "gradient": None}},
    )
    assert list(settings) == ["base", "other"]
    assert settings["base"].correction.order == ["dst", "harrison1983"]
    assert settings["other"].correction.order == ["horner"]
    assert settings["other"].correction.same_depth_m == 20.0


def test_a_scenario_may_take_another_surface_model(folder):
    settings = load(
        folder,
        surface_temperature={"model": "linear", "at_sea_level_degc": 14, "std_k": 2.5},
        scenarios={"flat": {"surface_temperature": {"model": "constant", "temperature_degc": 9}}},
    )
    flat = settings["flat"].surface_temperature
    assert (flat.model, flat.temperature_degc, flat.std_k) == ("constant", 9.0, 2.5)


@pytest.mark.parametrize("section", sorted(set(Settings.model_fields) - set(OVERLAID)))
def test_a_scenario_changes_nothing_that_all_share(folder, section):
    with pytest.raises(
        UserError, match=rf"scenarios\.other\.{section}: a scenario may change only"
    ):
        load(folder, scenarios={"other": {section: {}}})


def test_a_fault_of_base_is_not_told_again_for_each_scenario(folder):
    with pytest.raises(UserError) as caught:
        load(
            folder, gradient={"reference_depth_m": -1}, scenarios={"a": {"heat_flow": {}}, "b": {}}
        )
    assert caught.value.faults == ["gradient.reference_depth_m: must be positive (got -1)"]


def test_a_glob_finds_its_files_in_order(folder):
    for name in ("b.csv", "a.csv"):
        (folder / name).write_text("well,depth,temperature\nA,1000,40\n", encoding="utf-8")
    settings = load(folder, inputs={"readings": [{"file": "[ab].csv"}]})["base"]
    names = [Path(path).name for path in input_tables(settings.inputs, folder)]
    assert names == ["a.csv", "b.csv", "wells.csv"]


def test_paths_start_at_the_config(folder, monkeypatch, tmp_path_factory):
    monkeypatch.chdir(tmp_path_factory.mktemp("elsewhere"))
    record = {"model": "exponential", "sill": 60.0, "range_m": 4e4, "nugget": 0.0}
    documents.save({"covariance": record}, folder / "model.json")
    settings = load(folder, kriging={"variogram": {"pinned": "model.json"}})["base"]
    pinned = with_paths(settings, nearby(folder))["kriging"]["variogram"]["pinned"]
    assert os.path.samefile(pinned, folder / "model.json")
    assert pinned in input_files(settings, nearby(folder))


def test_a_path_inside_the_current_folder_is_relative(folder, monkeypatch):
    monkeypatch.chdir(folder)
    assert nearby(folder / "sub" / "x.csv") == os.path.join("sub", "x.csv")
    assert nearby(folder) == "."
    assert os.path.isabs(nearby(folder.parent / "y.csv"))


def test_plain_settings_rebuild_the_same_settings(folder):
    """The params of a job give back the section it was made from."""
    settings = load(folder)["base"]
    plain = settings.model_dump(mode="json")
    assert Settings(**plain) == settings


def test_the_order_of_the_keys_means_nothing(folder):
    def turned(raw):
        if isinstance(raw, dict):
            return {key: turned(raw[key]) for key in reversed(raw)}
        return [turned(each) for each in raw] if isinstance(raw, list) else raw

    raw = yaml.safe_load(DEMO.read_text(encoding="utf-8"))
    one, other = (load_config(each, "", DEMO.parent)["base"] for each in (raw, turned(raw)))
    assert repr(one.model_dump(mode="json")) == repr(other.model_dump(mode="json"))


def test_every_column_says_what_it_is():
    for kind, columns in INPUT_COLUMNS.items():
        assert all(column.description for column in columns.values())
        assert {name for group in ONE_OF.get(kind, ()) for name in group} <= set(columns)
        assert columns["well"].text, "well names are always text"


def test_every_setting_is_described():
    schema = Settings.model_json_schema()
    models = [schema, *schema["$defs"].values()]
    blank = [
        f"{model['title']}.{name}"
        for model in models
        for name, field in model["properties"].items()
        if not field.get("description") and name != "model"
    ]
    assert blank == []


def test_the_readme_of_the_config_is_in_step():
    text = (ROOT / "config" / "README.md").read_text(encoding="utf-8")
    assert document.refreshed(text) == text, (
        "make it anew: PYTHONPATH=scripts python -m basinheat.settings.document config/README.md"
    )


def test_every_flag_of_screening_is_explained_with_its_severity_and_setting():
    """Numbers are the settings' defaults; dots stand for what only a record can say."""
    lines = {line.split("`")[1]: line for line in document.flags_table().splitlines()[2:]}
    assert set(lines) == {*READINGS, *WELLS}
    assert not any("{" in line for line in lines.values())
    high = Screening().gradient_high_k_km
    assert (
        f"| doubt | the gradient from the surface is … K/km, above {high:g} K/km"
        in (lines["gradient_high"])
    )
    assert "| readings | note |" in lines["old_reading"]


def test_an_alias_inside_what_it_names_is_a_fault():
    """YAML allows both: a value that holds itself, and a few lines that stand for a billion."""
    endless = yaml.safe_load("{run: &a [*a], crs: x}")
    tens = ", ".join(["*{0}"] * 10)
    lines = [f"{b}: &{b} [{tens.format(a)}]" for a, b in itertools.pairwise("abcdefghij")]
    billion = yaml.safe_load("a: &a [1, 1]\n" + "\n".join(lines))
    for raw in (endless, billion):
        with pytest.raises(UserError, match=r"the config: it has more than .* alias"):
            load_config(raw, "c.yaml", ".")


@pytest.mark.parametrize("form", ["%", "%Q", "%Y %Y", "x", "%d.%m.", ""])
def test_a_form_of_dates_must_hold_a_year_that_can_be_read(form):
    table = {"file": "r.csv", "date_format": form}
    raw = SMALLEST | {"inputs": SMALLEST["inputs"] | {"readings": [table]}}
    with pytest.raises(
        UserError, match=r"readings\[0\].date_format: no date can be read"
    ) as caught:
        load_config(raw, "c.yaml", ".", check_files=False)
    assert len(caught.value.faults) == 1


@pytest.mark.parametrize("form", ["%m/%d/%Y", "%d-%b-%y", "%Y", "%m/%Y", "%Y%m%d %H:%M"])
def test_usual_forms_of_dates(form):
    table = {"file": "r.csv", "date_format": form}
    raw = SMALLEST | {"inputs": SMALLEST["inputs"] | {"readings": [table]}}
    settings = load_config(raw, "c.yaml", ".", check_files=False)["base"]
    assert settings.inputs.readings[0].date_format == form


def test_a_fault_is_one_visible_line_whatever_the_names_in_it():
    """A break would make two lines of it; U+202E turns the rest of a line around (Unicode 9)."""
    faults = UserError(["a\nb\r\x00: c\u202e\u2028 é \ud800"], heading="x\ny").faults
    assert faults == ["a\\nb\\r\\x00: c\\u202e\\u2028 é \\ud800"]
    assert str(UserError("one", heading="x\ny")).splitlines() == ["x\\ny", "  one"]


def test_a_crs_that_no_file_can_hold_is_a_fault():
    raw = SMALLEST | {"crs": yaml.safe_load('"\\ud800"')}
    with pytest.raises(UserError, match=r"crs: .*\\ud800"):
        load_config(raw, "c.yaml", ".")
