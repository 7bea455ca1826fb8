"""Configs, damaged: other YAML in place of values, keys nobody knows, bytes cut out.

`below` is what `input_mutations` says.
"""

from copy import deepcopy

import yaml
from input_mutations import Below, cut_or_inserted, pick, plain_config

# Pieces of YAML in place of a value, as a person or a malicious one may write them.
PIECES = (
    "", "~", "null", "true", "no", "0", "-1", "1e999", ".inf", "-.inf", ".nan", "1_000",
    "0x" + "f" * 40, "0b1", "1:30:00", "9" * 60, "-0.0", "1984-06-04", "1984-06-04T14:30:00Z",
    "'1'", '"\\ud800"', '"\\0"', '"a\\nb"', '"\\e[31m"', "[]", "[[]]", "{}", "{a: {}}",
    "[1, [2, {a: 3}]]", "{1: 2}", "{true: no}", "{~: 1}", "{1984-06-04: 1}", "{[1, 2]: 3}",
    "{1.5: x, .nan: y}", "!!set {a, b}", "!!binary aGVsbG8=", "!!omap [a: 1]",
    "!!pairs [a: 1, a: 2]", "!!python/object:os.system {}", "!!python/none", "!unknown x",
    "!!str 1", "!!float x", "!!int 1.5", "&a [*a]", "&a {b: *a}", "*nowhere", "<<: {a: 1}",
    "{<<: {file: x.csv}}", "EPSG:0", "EPSG:4326", "EPSG:99999999", "'+proj=utm +zone=31'",
    "OGC:CRS84", "GEOGCS[", "wells.csv", "w*.csv", "'**'", "'[a-'", "../..", ".", "nowhere/*.csv",
    "wells.parquet", "wells.xlsx", "wells.las", "wells.gpkg", "degF", "furlong", "m**", "m/0",
    "(((", "'1e9**1e9 m'", "'m^9999999'", "horner", "[horner, horner]", "[west, 0]", "[0, 0, 1, 1]",
    "[.nan, 0, 1, 1]", "\u202eabc", "'\U0001f30b'", "'%'", "'{x}'", "auto", "x" * 5000, "constant",
    "column", "raster", "[{file: wells.csv}]", "{file: wells.csv}", "[1, 1.0, '1']", "[1e-300]",
    "[1e300]", "[5e-324]", "99999999999999999999", "'\\'", "|\n  text\n  more", "[" * 60 + "]" * 60,
)  # fmt: skip
KEYS = (
    "file", "columns", "base", "model", "units", "crs", "seed", "x" * 300, "1", "a b", "\u00e9",
    "__class__", "a\nb",
)  # fmt: skip


def rich_config() -> dict:
    """A config that names most sections, of files with the good sheets."""
    config = plain_config()
    config["inputs"]["wells"][0] |= {
        "columns": {"well": "well", "x": "x", "y": "y", "ground_elevation": "ground_elevation"},
        "units": {"ground_elevation": "ft"}, "missing": ["NA", "x"], "crs": "EPSG:32631",
        "decimal": ".",
    }  # fmt: skip
    config["inputs"]["readings"][0] |= {
        "kinds": {"LOG": "bht"}, "kind": "bht", "date_format": "%Y-%m-%d", "skip_lines": 0,
        "zero_is_missing": ["depth"], "unit_columns": {}, "thousands": "", "encoding": "utf-8",
    }  # fmt: skip
    config["inputs"]["layers"][0] |= {"shape": "intervals", "depth_reference": "measured"}
    config["inputs"] |= {"well_names": "exact", "rasters": {}, "las": []}
    return config | {
        "screening": {"hottest_degc": 400.0, "neighbours": 12, "vintage_year": 1950},
        "surface_temperature": {"model": "linear", "at_sea_level_degc": 12.5, "std_k": 1.5},
        "correction": {
            "order": ["equilibrium", "horner"], "region": "oklahoma",
            "calibration": {"model": "auto"},
        },
        "gradient": {"reference_depth_m": 2000},
        "conductivity": {"lithologies": {"salt": "halite"}, "below_layers": {"std_ln": 0.2}},
        "heat_flow": {"published_within_km": 100.0},
        "maps": {
            "cell_size_m": 1000, "extent": "wells", "mask": {"max_distance_km": 20},
            "depths_m": [1000, 2000], "isotherms_degc": [100],
        },
        "kriging": {"engine": "auto", "variogram": {"model": "auto"}, "drift": "none"},
        "validation": {"holdout": ["N01"], "block_range_share": 0.5},
        "report": {"wells_drawn": 10},
        "scenarios": {
            "warm": {"heat_flow": {"regional_mw_m2": 60}},
            "other": {"kriging": {"drift": "linear"}},
        },
        "credits": "nobody",
        "seed": 1,
    }  # fmt: skip


def bad_yaml(below: Below, config: dict) -> str:
    """The config as YAML in which some values, keys or lines are others."""
    config = deepcopy(config)
    pieces: dict[str, str] = {}
    for number in range(1 + below(4)):
        mark = f"piece{number}here"
        pieces[mark] = pick(below, PIECES)
        _replaced(below, config, mark)
    text = yaml.safe_dump(config, default_flow_style=None, width=10_000, allow_unicode=True)
    for mark, piece in pieces.items():
        text = text.replace(mark, piece)
    if below(6) == 0:
        data = cut_or_inserted(below, text.encode("utf-8"))
        text = data.decode("utf-8", "replace")
    return text


def _replaced(below: Below, config: dict, mark: str) -> None:
    """Walk into the config and put the mark somewhere: in place of a value, or at a new key."""
    here = config
    while True:
        places = sorted(here, key=str) if isinstance(here, dict) else range(len(here))
        if not places or below(6) == 0:
            break
        place = pick(below, list(places))
        inner = here[place]
        if not isinstance(inner, dict | list) or below(4) == 0:
            here[place] = mark
            return
        here = inner
    if isinstance(here, dict):
        here[pick(below, KEYS)] = mark
    else:
        here.append(mark)
