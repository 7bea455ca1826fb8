"""Conductivity, porosity and heat production against outside values.

Rows named E.., F.. are rows of the method notes' check values: numbers computed apart from this
code from the published formula. Whether the coefficients were read or remembered is said per test.
"""

import numpy as np
import pytest

from basinheat.conductivity import catalogue, conditions, heat_production, mixing, porosity

MATRIX_WATER = ([0.8, 0.2], [4.0, 0.6])


@pytest.mark.parametrize(
    ("mix", "expected"),
    [
        (mixing.arithmetic, 3.32),  # E1a
        (mixing.harmonic, 1.875),  # E1, three decimals
        (mixing.geometric, 2.737),  # E1, three decimals
        (mixing.square_root, 3.0797419),  # E1s
    ],
)
def test_mixing_laws(mix, expected):
    assert mix(*MATRIX_WATER) == pytest.approx(expected, abs=5e-4, rel=1e-7)


@pytest.mark.parametrize(
    ("rule", "expected"),
    [
        ("arithmetic", 3.32),  # E1a
        ("harmonic", 1.875),  # E1, three decimals
        ("geometric", 2.737),  # E1, three decimals
        ("square_root", 3.0797419),  # E1s
        ("hashin_shtrikman_upper", 3.1206897),  # E1u
        ("hashin_shtrikman_lower", 2.5741935),  # E1l
    ],
)
def test_matrix_and_pore_water(rule, expected):
    """Matrix 4, water 0.6 W/(m K), porosity 0.2; and the limits of no pores and nothing but."""
    matrix, fluid = np.full(3, 4.0), np.full(3, 0.6)
    found = mixing.with_fluid(matrix, fluid, np.array([0.2, 0.0, 1.0]), rule)
    assert found == pytest.approx([expected, 4.0, 0.6], rel=2e-4 if rule[0] == "g" else 1e-7)


def test_hashin_shtrikman_bounds():
    lower, upper = mixing.hashin_shtrikman(*MATRIX_WATER)
    assert lower == pytest.approx(2.5741935, rel=1e-7)  # E1l
    assert upper == pytest.approx(3.1206897, rel=1e-7)  # E1u


def test_hashin_shtrikman_is_the_two_phase_formula():
    """Hashin & Shtrikman (1962) as printed for matrix and pore fluid."""
    matrix, fluid, phi = 4.0, 0.6, 0.2
    upper = matrix + phi / (1 / (fluid - matrix) + (1 - phi) / (3 * matrix))
    lower = fluid + (1 - phi) / (1 / (matrix - fluid) + phi / (3 * fluid))
    assert mixing.hashin_shtrikman(*MATRIX_WATER) == pytest.approx((lower, upper))


def test_three_minerals_mix_geometrically():
    """E2; minerals read in Goto et al. (2017): quartz 7.69, illite 1.85, calcite 3.59."""
    assert mixing.geometric([0.6, 0.25, 0.15], [7.69, 1.85, 3.59]) == pytest.approx(
        4.8041096, rel=1e-7
    )


def test_layers_in_series():
    """E3: 500 m at 2.0, 300 m at 3.2, 200 m at 5.0 W/(m K)."""
    assert mixing.harmonic([0.5, 0.3, 0.2], [2.0, 3.2, 5.0]) == pytest.approx(2.6058632, rel=1e-7)


@pytest.mark.parametrize(
    ("surface", "per_km", "at_2km", "mean"),
    [
        (0.63, 0.51, 0.22717481, None),  # E4_shale; Sclater & Christie (1980), read
        (0.49, 0.27, 0.28554664, 0.28641478),  # E4_sand; read
        (0.70, 0.71, 0.16919981, 0.17277617),  # E4_chalk; read
        (0.56, 0.39, 0.25670737, 0.25833735),  # E4_shalysand; from memory
    ],
)
def test_athy_porosity(surface, per_km, at_2km, mean):
    assert porosity.athy(2000.0, surface, per_km / 1000) == pytest.approx(at_2km, rel=1e-7)
    if mean is not None:
        assert porosity.athy_mean(1500.0, 2500.0, surface, per_km / 1000) == pytest.approx(
            mean, rel=1e-7
        )


@pytest.mark.parametrize(
    ("law", "a", "b", "k", "degc", "expected"),
    [
        (conditions.vosteen2003_cryst, 0.0030, 0.0042, 2.0, 100, 1.8661541),
        (conditions.vosteen2003_cryst, 0.0030, 0.0042, 2.0, 200, 1.7199226),
        (conditions.vosteen2003_cryst, 0.0030, 0.0042, 3.0, 100, 2.6717153),
        (conditions.vosteen2003_cryst, 0.0030, 0.0042, 3.0, 200, 2.3396579),
        (conditions.vosteen2003_cryst, 0.0030, 0.0042, 4.0, 100, 3.4869628),
        (conditions.vosteen2003_cryst, 0.0030, 0.0042, 4.0, 200, 2.9876236),
        (conditions.vosteen2003_sed, 0.0034, 0.0039, 2.0, 100, 1.807655),
        (conditions.vosteen2003_sed, 0.0034, 0.0039, 2.0, 200, 1.5965016),
        (conditions.vosteen2003_sed, 0.0034, 0.0039, 3.0, 100, 2.6058246),
        (conditions.vosteen2003_sed, 0.0034, 0.0039, 3.0, 200, 2.2101455),
        (conditions.vosteen2003_sed, 0.0034, 0.0039, 4.0, 100, 3.4110335),
    ],
)
def test_vosteen_schellschmidt(law, a, b, k, degc, expected):
    """E5vsc, E5vss: values with the printed, rounded k0, which is 0.2-0.4 % off at 25 degC."""
    assert law(k, degc) == pytest.approx(expected, rel=0.004)
    # with the k0 that the printed law itself implies at 25 degC, the law is met exactly
    roots = np.roots([1.0, -(0.99 + 25 * a) * k, 25 * b * k])
    k0 = roots.max()
    assert law(k, degc) == pytest.approx(k0 / (0.99 + degc * (a - b / k0)), rel=1e-12)


@pytest.mark.parametrize(
    ("k20", "degc", "expected"),
    [(2.0, 100, 1.9569878), (2.0, 200, 1.9238554), (3.0, 200, 2.448696), (4.0, 100, 3.4214118)],
)
def test_sekiguchi_waples(k20, degc, expected):
    """E5sek; coefficients read in three open codes."""
    k25 = 358 * (1.0227 * k20 - 1.882) * (1 / 298.15 - 0.00068) + 1.84
    assert conditions.sekiguchi_waples(k25, degc) == pytest.approx(expected, rel=1e-7)


@pytest.mark.parametrize(
    ("law", "k20", "degc", "expected"),
    [
        ("sekiguchi1984", 2.0, 100, 1.9576563),
        ("sekiguchi1984", 3.0, 100, 2.6899969),
        ("sekiguchi1984", 4.0, 100, 3.4223375),
        ("sekiguchi1984", 4.0, 200, 2.9749589),
        ("chapman1984", 2.0, 100, 1.5710456),
        ("chapman1984", 3.0, 100, 2.3565684),
        ("chapman1984", 3.0, 200, 1.858351),
        ("chapman1984", 4.0, 200, 2.4778013),
    ],
)
def test_laws_anchored_at_20(law, k20, degc, expected):
    """E5sekg, E5chap: the value at 20 degC goes in through the law; coefficients from memory."""
    function = conditions.LAWS[law]
    k25 = k20 * k20 / function(k20, 20.0)  # both laws are straight lines in k: first guess
    for _ in range(20):
        k25 *= k20 / function(k25, 20.0)
    assert function(k25, degc) == pytest.approx(expected, rel=1e-6)


@pytest.mark.parametrize(
    ("k", "degc", "expected"),
    [
        (2.0, 100, 1.9950421),
        (2.0, 200, 1.9901088),
        (3.0, 100, 2.7413628),
        (3.0, 200, 2.4622419),
        (4.0, 200, 3.0414363),
    ],
)
def test_sass(k, degc, expected):
    """E5sass, from memory: its printed k0 is 0.1 % off at 25 degC; ours is the exact inverse."""
    assert conditions.sass1992(k, degc) == pytest.approx(expected, rel=0.002)
    k0 = np.roots([1.0, -(1.007 + 25 * 0.0036) * k, 25 * 0.0072 * k]).max()
    exact = k0 / (1.007 + degc * (0.0036 - 0.0072 / k0))
    assert conditions.sass1992(k, degc) == pytest.approx(exact, rel=1e-9)


@pytest.mark.parametrize(
    ("a", "b", "linear", "squared", "product"),
    [(0.0030, 0.0042, None, 1.134225, 0.42), (0.0034, 0.0039, 0.5375, 1.155625, 0.39)],
)
def test_printed_inverse_is_the_exact_one_rounded(a, b, linear, squared, product):
    """E5id: 0.5 (0.99 + 25 a), its square times 4, 100 b; printed 0.54, 1.13/1.16, 0.42/0.39.

    Vosteen & Schellschmidt (2003); k0 = linear k25 + sqrt(squared k25^2 - product k25) / 2.
    """
    k25 = np.linspace(1.5, 6.0, 10)
    k0 = (0.99 + 25 * a) / 2 * k25 + 0.5 * np.sqrt(squared * k25**2 - product * k25)
    law = conditions.vosteen2003_sed if a == 0.0034 else conditions.vosteen2003_cryst
    assert law(k25, 120.0) == pytest.approx(k0 / (0.99 + 120 * (a - b / k0)), rel=1e-9)
    assert linear is None or (0.99 + 25 * a) / 2 == pytest.approx(linear)


def test_pressure():
    """E8: Fuchs & Foerster (2014), 2.5 W/(m K) at 30 MPa; from memory."""
    assert conditions.at_pressure(2.5, 30.0) == pytest.approx(2.702539, rel=1e-6)
    assert conditions.at_pressure([1.0, 2.5, 5.0], 0.0) == pytest.approx([1.0, 2.5, 5.0])


def test_dipping_beds():
    """E9: 1.6 across and 2.4 W/(m K) along beds that dip 30 degrees: 1.8 vertically."""
    assert 1.6 * conditions.tilted(30.0, 2.4 / 1.6) == pytest.approx(1.8, rel=1e-9)
    assert 1.6 * conditions.tilted([0.0, 90.0], 1.5) == pytest.approx([1.6, 2.4])


def test_two_laws_of_salt_agree():
    """E6z: Zoth & Haenel (1988), from memory: 5.89 at 20 degC, 4.4677778 at 100 degC."""
    fall = conditions.halite(5.5, 100.0) / conditions.halite(5.5, 20.0)
    assert fall == pytest.approx(4.4677778 / 5.89, rel=0.03)


@pytest.mark.parametrize(("degc", "expected"), [(20, 0.599708), (25, 0.60748125), (60, 0.651772)])
def test_water_agrees_with_the_quadratic(degc, expected):
    """E7h: 0.565 + 1.88e-3 T - 7.23e-6 T2, its sign corrected; all fits within 0.7 % to 60 degC."""
    assert conditions.water(degc) == pytest.approx(expected, rel=0.007)


@pytest.mark.parametrize(
    ("degc", "expected"), [(20, 5.6517776), (60, 4.8024787), (100, 4.1750842), (150, 3.5890014)]
)
def test_halite(degc, expected):
    """E6; 6.2 / (1 + 0.00485 T), read in Wangen (2010), table 2.4."""
    at_25 = 6.2 / (1 + 0.00485 * 25)
    assert conditions.halite(at_25, degc) == pytest.approx(expected, rel=1e-7)


@pytest.mark.parametrize(
    ("degc", "expected"), [(20, 0.60174501), (60, 0.65229141), (100, 0.67893025)]
)
def test_water(degc, expected):
    """E7p; Popiel & Wojtkowiak, coefficients read in open documentation."""
    assert conditions.water(degc) == pytest.approx(expected, rel=1e-7)


@pytest.mark.parametrize(
    ("degc", "expected"), [(20, 0.59750462), (25, 0.60638476), (60, 0.65289351)]
)
def test_water_agrees_with_ramires(degc, expected):
    """E7r: Ramires et al. (1995), another fit, from memory; both within 1 %."""
    assert conditions.water(degc) == pytest.approx(expected, rel=0.01)


def test_heat_production():
    assert heat_production.from_elements(2700, 3.0, 10.0, 2.5) == pytest.approx(1.69722)  # F4
    assert heat_production.from_elements(2400, 3.1, 9.5, 2.2) == pytest.approx(1.475712)  # F4b
    # F4c: Wangen (2010), table 6.2, prints 1.7 for shale of these elements
    assert heat_production.from_elements(2700, 3.1, 9.5, 2.2) == pytest.approx(1.7, abs=0.05)
    # F5: Bücker & Rybach (1996), constants read
    assert heat_production.from_gamma_ray([30, 60, 100, 150]) == pytest.approx(
        [0.46136, 0.93536, 1.56736, 2.35736]
    )


# --- facts of the trade: common practice, no source ----------------------------------------------


def _whole_rock(name: str, depth_m: float, degc: float) -> float:
    rocks = catalogue.load()
    i = rocks.names.index(name)
    matrix = conditions.at_temperature(
        rocks.conductivity_w_mk[[i]], np.array([degc]), rocks.law[[i]]
    )[0]
    phi = porosity.athy(depth_m, rocks.porosity_surface[i], rocks.compaction_per_m[i])
    return float(mixing.geometric([1 - phi, phi], [matrix, conditions.water(degc)]))


@pytest.mark.parametrize(
    "name", ["sandstone", "siltstone", "limestone", "chalk", "granite", "gneiss", "conglomerate"]
)
def test_most_rocks_conduct_two_to_three(name):
    """Common practice: most rocks 2-3 W/(m K) on the laboratory's bench; here rock of 3 km."""
    assert 2.0 <= _whole_rock(name, 3000.0, 25.0) <= 3.1


@pytest.mark.parametrize("degc", [20.0, 40.0])
def test_salt_conducts_five_to_seven(degc):
    """Common practice: salt 5-7 W/(m K) near the surface."""
    assert 5.0 <= _whole_rock("halite", 1000.0, degc) <= 7.0


def test_coal_insulates():
    """Common practice: coal 0.2-0.5 W/(m K)."""
    assert 0.2 <= _whole_rock("coal", 1000.0, 40.0) <= 0.5


def test_shale_at_depth_is_between_the_two_schools():
    """Blackwell & Steele (1989), read in Wangen (2010): soft shale 1.05-1.45; older sets to 2.1."""
    assert 1.05 <= _whole_rock("shale", 500.0, 25.0) <= 1.45
    assert 1.2 <= _whole_rock("shale", 2500.0, 90.0) <= 2.1
