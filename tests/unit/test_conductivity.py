"""Promises of the conductivity laws, mixtures and catalogue."""

import csv

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from basinheat.conductivity import catalogue, conditions, mixing, porosity
from basinheat.errors import UserError

conductivity = st.floats(0.5, 8.0)
parts = st.lists(st.tuples(st.floats(0.01, 1.0), conductivity), min_size=2, max_size=5)


@given(parts)
def test_means_are_in_order(pairs):
    """Harmonic <= lower bound <= upper bound <= arithmetic; geometric lies between the means."""
    f, k = np.array(pairs).T
    f = f / f.sum()
    lower, upper = mixing.hashin_shtrikman(f, k)
    means = [mixing.harmonic(f, k), lower, upper, mixing.arithmetic(f, k)]
    assert np.all(np.diff(means) >= -1e-9)
    assert means[0] - 1e-9 <= mixing.geometric(f, k) <= means[-1] + 1e-9
    assert means[0] - 1e-9 <= mixing.square_root(f, k) <= means[-1] + 1e-9


@given(conductivity)
def test_a_mixture_of_one_rock_is_that_rock(k):
    for mix in (mixing.arithmetic, mixing.harmonic, mixing.geometric, mixing.square_root):
        assert mix([0.3, 0.7], [k, k]) == pytest.approx(k)


@pytest.mark.parametrize("name", conditions.LAW_NAMES)
@given(k=st.floats(0.1, 8.0))
def test_laws_give_back_the_value_at_25(name, k):
    assert conditions.LAWS[name](k, 25.0) == pytest.approx(k, rel=1e-12)


@pytest.mark.parametrize("name", conditions.LAW_NAMES)
@given(data=st.data())
def test_good_conductors_never_conduct_better_when_hot(name, data):
    turning = {"kola2008": 2.23}.get(name, 2.0)  # b/a: below, the law as published rises
    k = data.draw(st.floats(turning, 8.0))
    values = conditions.LAWS[name](k, np.linspace(0.0, 300.0, 61))
    assert np.all(np.diff(values) <= 1e-12)
    assert np.all(values > 0.3 * k)


@pytest.mark.parametrize("name", ["vosteen2003_sed", "vosteen2003_cryst"])
@given(k=st.floats(0.05, 1.2))
def test_poor_conductors_rise_by_five_percent_at_most(name, k):
    values = conditions.LAWS[name](k, np.linspace(25.0, 300.0, 56))
    assert np.all(np.isfinite(values))
    assert np.all(values <= 1.05 * k + 1e-12)


def test_every_rock_follows_its_own_law():
    k = np.array([3.0, 3.0, 6.0, 0.3])
    names = ["vosteen2003_sed", "vosteen2003_cryst", "halite", "none"]
    law = np.array([conditions.LAW_NAMES.index(name) for name in names])
    found = conditions.at_temperature(k, np.full(4, 120.0), law)
    alone = [conditions.LAWS[name](value, 120.0) for name, value in zip(names, k, strict=True)]
    assert found == pytest.approx(np.array(alone))


def test_mean_porosity_is_the_integral():
    z = np.linspace(400.0, 2400.0, 20001)
    exact = np.trapezoid(porosity.athy(z, 0.6, 5e-4), z) / 2000
    assert porosity.athy_mean(400.0, 2400.0, 0.6, 5e-4) == pytest.approx(exact, rel=1e-8)
    assert porosity.athy_mean(400.0, 2400.0, 0.1, 0.0) == pytest.approx(0.1)


def test_every_row_of_the_catalogue_tells_its_source():
    rocks = catalogue.load()
    assert len(rocks.names) >= 20
    for name, source in zip(rocks.names, rocks.sources, strict=True):
        assert any(word in source for word in ("read", "common practice", "from memory")), name


def test_names_are_found_whatever_their_spelling():
    rocks = catalogue.load()
    found = rocks.places(["Rock-Salt", "SHALE", "my rock"], {"My Rock": "granite"})
    assert [rocks.names[i] for i in found.values()] == ["halite", "shale", "granite"]


def test_unknown_names_are_told_all_at_once_with_the_nearest():
    with pytest.raises(UserError) as caught:
        catalogue.load().places(["sandstoen", "blort"], {"x": "shael"})
    text = str(caught.value)
    assert len(caught.value.faults) == 3
    assert "conductivity.lithologies" in text
    assert '"sandstoen"' in text and "nearest is sandstone" in text
    assert '"blort"' in text and '"shael"' in text and "nearest is shale" in text


def _write(path, **change):
    with catalogue.OWN.open(encoding="utf-8") as file:
        rows = list(csv.DictReader(file))[:3]
    rows[1].update(change)
    with path.open("w", newline="", encoding="utf-8") as file:
        writer = csv.DictWriter(file, rows[0])
        writer.writeheader()
        writer.writerows(rows)
    return path


@pytest.mark.parametrize(
    ("change", "words"),
    [
        ({"conductivity_w_mk": "-3"}, "line 3: conductivity_w_mk"),
        ({"conductivity_w_mk": "nan"}, "line 3: conductivity_w_mk"),
        ({"porosity_surface": "55"}, "porosity_surface"),
        ({"std_ln": ""}, "std_ln"),
        ({"law": "vosteen"}, "law"),
        ({"lithology": "sandstone"}, "names two rocks"),
        ({"lithology": ""}, "lithology is blank"),
    ],
)
def test_a_faulty_catalogue_is_refused_with_its_line(tmp_path, change, words):
    with pytest.raises(UserError, match=words):
        catalogue.load(_write(tmp_path / "rocks.csv", **change))


def test_a_catalogue_of_ones_own_and_none(tmp_path):
    assert len(catalogue.load(_write(tmp_path / "rocks.csv")).names) == 3
    (tmp_path / "other.csv").write_text("lithology,k\nshale,2\n")
    with pytest.raises(UserError, match="conductivity_w_mk"):
        catalogue.load(tmp_path / "other.csv")
    with pytest.raises(UserError, match=r"conductivity\.catalogue"):
        catalogue.load(tmp_path / "absent.csv")
