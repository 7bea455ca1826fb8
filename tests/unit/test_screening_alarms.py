"""How often screening is wrong on invented basins, and what it catches.

A basin without dirt holds sound readings only, so each refusal there is a false alarm; a basin
with dirt keeps a list of what was spoiled. The bounds come from the statistics of the rules.
"""

import numpy as np
import pandas as pd
import pytest
import yaml
from scipy.stats import norm, t

from basinheat import ingest
from basinheat.settings.model import Settings
from basinheat.synthetic.basin import make_basin

SEEDS = (311, 312, 313)


def screened(folder, seed, **kind):
    """Return a basin of 150 wells and what ingest makes of it."""
    basin = make_basin(seed, 150, **kind)
    config = yaml.safe_load(basin.write(folder).read_text(encoding="utf-8"))
    return basin, ingest.prepare(Settings.model_validate(config), folder)


@pytest.fixture(scope="module", params=[True, False], ids=["hard", "easy"])
def sound(request, tmp_path_factory):
    """Return basins without dirt, screened."""
    parts = [
        screened(tmp_path_factory.mktemp("sound"), seed, hard=request.param, dirt=False)
        for seed in SEEDS
    ]
    return request.param, parts


def share(parts, code):
    """Return how many sound readings carry a code, among all."""
    flagged = sum(out.readings["flags"].str.contains(rf"\b{code}\b").sum() for _, out in parts)
    return flagged / sum(len(basin.felt) for basin, _ in parts)


def test_sound_readings_are_hardly_ever_refused(sound):
    """One in two hundred: our own bound; what is refused costs more than what is doubted."""
    _, parts = sound
    refused = sum((out.rejected["table"] == "readings").sum() for _, out in parts)
    assert refused <= 0.005 * sum(len(basin.felt) for basin, _ in parts)


def test_equal_runs_are_seldom_taken_for_copies(sound):
    """An honest pair is refused where it reads the same though two errors of rise were expected.

    The rise being normal, that happens to at most a share of step / error times the normal
    density at 2: with 1 degF and 1 K a reading, 2.1 %.
    """
    _, parts = sound
    step, error = 1.0 / 1.8, np.hypot(1.0, 1.0 / 1.8 / 12.0**0.5) * 2.0**0.5
    bound = step / error * norm.pdf(2.0)
    copies = sum((out.rejected["code"] == "copied_temperature").sum() for _, out in parts)
    pairs = sum(int((basin.felt["run"] > 0).sum()) for basin, _ in parts)
    assert pairs > 200
    assert copies <= bound * pairs


def test_outliers_are_as_rare_as_their_score_says(sound):
    """A scale from the absolute deviations of 12 neighbours tells as much as 12 x 0.37 values do.

    The efficiency of the median absolute deviation is 37 % (Rousseeuw & Croux 1993, Alternatives
    to the median absolute deviation, J. Am. Stat. Assoc. 88; from memory): t with 4.4 degrees of
    freedom.
    """
    _, parts = sound
    assert share(parts, "spatial_outlier") <= 2.0 * t.sf(3.5, 12 * 0.37)


def test_rounding_is_found_where_it_is_and_only_there(sound):
    """Some operators of hard basins round to 5 degF; a chance above the score is 0.2 % a file."""
    hard, parts = sound
    for _, out in parts:
        assert ("rounded_to_5" in set(out.findings["code"])) == hard


def test_times_that_go_on_are_never_taken_for_those_of_another_stop(sound):
    """Noted times of a set are wrong by one factor, so they keep their order."""
    _, parts = sound
    assert share(parts, "times_of_another_stop") == 0.0


@pytest.fixture(scope="module")
def dirty(tmp_path_factory):
    return [screened(tmp_path_factory.mktemp("dirty"), seed) for seed in SEEDS]


# What each way of spoiling a reading must be noticed as.
NOTICED_AS = {
    "celsius_in_fahrenheit_column": {"temperature_unit_suspect", "not_above_surface_temperature"},
    "metres_in_feet_column": {"depth_unit_suspect"},
    "below_surface_temperature": {"not_above_surface_temperature"},
    "too_hot": {"temperature_impossible"},
    # A log of an upper section, moved down, may still lie above the total depth.
    "deeper_than_total_depth": {"deeper_than_total_depth", "spatial_outlier"},
    "copied_reading": {"copied_temperature", "same_temperature"},
}


@pytest.mark.parametrize("code", NOTICED_AS)
def test_what_was_spoiled_is_noticed_as_what_it_is(dirty, code):
    lines = 0
    for basin, out in dirty:
        for row in basin.dirt[basin.dirt["code"] == code].to_dict("records"):
            found = out.findings
            here = (found["source_file"] == "readings.csv") & (found["source_line"] == row["line"])
            assert set(found.loc[here, "code"]) & NOTICED_AS[code], (row["line"], row["value"])
            lines += 1
    assert lines >= 2


def test_most_slips_of_unit_are_refused(dirty):
    """More than half: a slip that lies among the cold and the hot of its basin is doubted only."""
    refused = [
        line in set(out.rejected.loc[out.rejected["table"] == "readings", "source_line"])
        for basin, out in dirty
        for line in basin.dirt.loc[basin.dirt["code"].str.contains("_in_.*_column"), "line"]
    ]
    assert len(refused) >= 4
    assert pd.Series(refused).mean() > 0.5
