"""Questions of the first look together: one per cause, and answers that can be pasted."""

import numpy as np
import pandas as pd
import pytest
from firstlook_case import DEGF, FEET, asked, basin, column, seen

from basinheat.firstlook import (
    answers,
    columns,
    gradients,
)

# One question per cause, and answers that can be pasted


def test_one_trouble_is_asked_about_once(tmp_path):
    wells, readings = basin()
    readings["well"] = readings["well"].str.replace("W-", "w ")
    readings["date"] = np.resize(["1985", "n/r"], len(readings))
    readings["depth"] = (readings["depth"] * FEET).round(1)
    readings["since_circulation"] = 6.5
    for name in ("temperature", "depth", "since_circulation"):
        readings[name] = readings[name].map(lambda value: f"{value}".replace(".", ","))
    layers = pd.DataFrame({"well": readings["well"], "top": 10, "base": 900, "lithology": "shale"})
    tmp_path.mkdir(exist_ok=True)
    layers.drop_duplicates().to_csv(tmp_path / "layers.csv", index=False)
    inputs = {"layers": [{"file": "layers.csv"}]}
    record, _ = seen(tmp_path, wells, readings, inputs=inputs)
    text = "\n".join(asked(record))
    for once in ("`decimal", "well_names", "missing: [n/r]"):
        assert text.count(once) == 1, once
    assert len(record["questions"]) == 3
    weights = [(each["weight"], -each["rows"]) for each in record["questions"]]
    assert weights == sorted(weights)
    record, _ = seen(tmp_path, wells, readings, readings_file={"decimal": ","},
                     inputs=inputs | {"well_names": "normalised"})  # fmt: skip
    assert "\n".join(asked(record)).count("depth: ft") == 1
    assert len([each for each in record["questions"] if each["cause"] == "units"]) == 1


def test_what_is_pasted_is_a_config(tmp_path):
    """The second of two entries is asked about; the first must not get lost."""
    import yaml

    wells, readings = basin()
    readings["kind"] = np.resize(["bht", "LOG", "static?"], len(readings))
    tmp_path.mkdir(exist_ok=True)
    readings.assign(kind="bht", well="X").to_csv(tmp_path / "first.csv", index=False)
    both = [{"file": "first.csv", "missing": ["x.x"]},
            {"file": "readings.csv", "kinds": {"MTR": "bht"}}]  # fmt: skip
    record, _ = seen(tmp_path, wells, readings, inputs={"readings": both})
    lines = answers.together(record)
    typed = yaml.safe_load("\n".join(lines))
    assert typed["inputs"]["readings"][0] == both[0]
    assert typed["inputs"]["readings"][1]["kinds"] == {"MTR": "bht", "LOG": "bht"}
    assert any(line.strip() == '# "static?": "?"' for line in lines)
    (said,) = (each["ask"] for each in record["questions"] if "kinds" in each["lines"])
    assert '"static?": "?"' in said


@pytest.mark.parametrize(("count", "noise"), [(200, 4.0), (1000, 6.0)])
def test_noisy_readings_of_a_curved_geotherm_in_degrees_fahrenheit_and_feet(tmp_path, count, noise):
    """Right and wrong units of the same drawn basins: asked about in nearly all, and in none."""
    from types import SimpleNamespace

    rng = np.random.default_rng(4)
    file = SimpleNamespace(unit={"temperature": "degC", "depth": "m"}.__getitem__)
    found = {True: 0, False: 0}
    for _ in range(40):
        depth, well = rng.uniform(800.0, 3500.0, count), np.arange(count) // 2
        gradient = rng.normal(0.03, 0.003, count)[well]
        degc = 10.0 + gradient * depth + 10.0 * (1.0 - np.exp(-depth / 700.0))
        degc = degc + rng.normal(0.0, noise, count)
        ground, none = np.full(count, 10.0), np.zeros(count)
        for wrong in found:
            given = (DEGF(degc), depth * FEET) if wrong else (degc, depth)
            raw = gradients.Raw(*given, ground, none, none * np.nan, well)
            told = gradients.judge_units(file, raw, 5.0, 150.0)
            found[wrong] += {"temperature": "degF", "depth": "ft"} in [
                each["units"] for each in told["instead"]
            ]
    assert found[False] == 0 and found[True] >= 36


# Words


def test_kinds_rocks_names_and_dates_are_asked_for_with_the_likely_answer(tmp_path):
    wells, readings = basin()
    readings["kind"] = np.resize(["LOG", "DST 2", "STATIC", "?X"], len(readings))
    readings["date"] = "12/31/1985"
    readings["well"] = readings["well"].str.replace("W-", "w ")
    layers = "well,top,base,lithology\n" + "".join(f"W-{i:02d},10,900,sandston\n" for i in range(9))
    tmp_path.mkdir(exist_ok=True)
    (tmp_path / "layers.csv").write_text(layers, encoding="utf-8")
    record, _ = seen(tmp_path, wells, readings, inputs={"layers": [{"file": "layers.csv"}]})
    text = "\n".join(asked(record))
    assert '`kinds: {"?X": "?", DST 2: dst, LOG: bht, STATIC: equilibrium}`' in text
    assert "`well_names: normalised`" in text
    assert '`date_format: "%m/%d/%Y"`' in text
    assert "`lithologies: {sandston: sandstone}`" in text


def test_cells_that_are_no_numbers_and_numbers_that_are_none(tmp_path):
    _, readings = basin()
    comma = readings.assign(
        temperature=readings["temperature"].map(lambda t: f"{t}".replace(".", ","))
    )
    record, _ = seen(tmp_path, readings=comma)
    assert any('`decimal: ","`' in each for each in asked(record))
    words = readings.astype({"temperature": object})
    words.loc[:9, "temperature"] = "not read"
    record, _ = seen(tmp_path, readings=words)
    assert any("`missing: [not read]`" in each for each in asked(record))
    assert column(record, "readings", "temperature")["wrong"] == 10
    nines = readings.assign(since_circulation=np.resize([999.0, 8.0, 12.0, 6.0], len(readings)))
    record, _ = seen(tmp_path, readings=nines)
    assert any('`missing: ["999"]`' in each for each in asked(record))


def test_a_reading_of_99_degrees_is_a_reading():
    degc = np.concatenate([np.linspace(60.0, 140.0, 300), np.full(10, 99.0)])
    assert columns._stand_ins(degc) == []
    assert columns._stand_ins(np.append(degc, np.full(10, 9999.0))) == [[9999.0, 10]]
