"""Rock intervals, formation tops, deviation surveys."""

from .base import case, good_wells, inputs, plus, well_rows, with_cell, with_columns
from .model import ledger, refused, rows

HEADERS = "well,top,base,lithology,conductivity"
TOPS_HEADERS = "well,top,lithology"


def good_layers() -> str:
    """Shale over sandstone in each well; those of N<i> are in lines 2 i + 2 and 2 i + 3."""
    lines = [HEADERS]
    for well, *_, total_depth in well_rows():
        lines += [f"{well},5,400,shale,", f"{well},400,{total_depth},sandstone,"]
    return "\n".join(lines) + "\n"


def good_tops() -> str:
    """The same as tops, the deeper one first."""
    lines = [TOPS_HEADERS]
    for well, *_ in well_rows():
        lines += [f"{well},400,sandstone", f"{well},5,shale"]
    return "\n".join(lines) + "\n"


def good_wide() -> str:
    """The same with a column per formation, which is absent in some wells."""
    lines = ["well,Lower Sand,Upper Clay,Old Lime"]
    for i, (well, *_) in enumerate(well_rows()):
        lines.append(f"{well},400,5,{('', '0', '700')[i % 3]}")
    return "\n".join(lines) + "\n"


def good_surveys() -> str:
    """Stations of N12 and N15, which are inclined."""
    lines = ["well,depth,inclination,azimuth"]
    for well in ("N12", "N15"):
        lines += [f"{well},{depth},{depth / 100},45" for depth in (0, 500, 1000, 1500, 2000)]
    return "\n".join(lines) + "\n"


def layers(name, why, expected, text, wells=None, **settings):
    table = {"file": "layers.csv", **settings}
    config = inputs(layers=table)
    return case(name, why, expected, wells=wells, files={"layers.csv": text}, config=config)


def surveys(name, why, expected, text, **settings):
    table = {"file": "surveys.csv", **settings}
    return case(name, why, expected, files={"surveys.csv": text}, config=inputs(surveys=table))


LAYERS = good_layers()
WIDE = {"Lower Sand": "sandstone", "Upper Clay": "shale", "Old Lime": "limestone"}
NO_TOTAL_DEPTH = with_cell(good_wells(), 4, "total_depth", "")
IN_FEET = HEADERS + "\nN15,0,1000,shale,\nN15,1000,2000,sandstone,\n"

INTERVALS = [
    layers(
        "layers_that_overlap",
        "Two logs of one well were joined, and their intervals overlap.",
        ledger({("layers", "layer_overlap", None): 1}, layers=32),
        plus(LAYERS, "N15,300,600,limestone,"),
    ),
    layers(
        "layers_without_thickness",
        "Top and base are the same, or stand in each other's column.",
        ledger(rows("layers", "no_thickness", 34, 2), layers=32),
        plus(LAYERS, "N15,3500,3500,shale,", "N15,3600,3550,shale,"),
    ),
    layers(
        "layers_without_rock",
        "Nobody described the cuttings of this interval.",
        ledger({("layers", "no_rock", 34): 1}, layers=32),
        plus(LAYERS, "N15,3500,3550,,"),
    ),
    layers(
        "layers_of_a_rock_that_no_catalogue_knows",
        "A word of the local geologist is in no catalogue.",
        # Corrected: the expectation was no_rock, which the manual gives to layers that state no
        # rock ("lithology ... name of the catalogue or of conductivity.lithologies"). The
        # catalogue is a scenario's: there the row is refused as lithology_unknown, not here.
        ledger(layers=33),
        plus(LAYERS, "N15,3500,3550,quixolite,"),
    ),
    layers(
        "layers_of_a_measured_conductivity_without_rock",
        "The core was measured, not described: that is enough.",
        ledger(layers=33),
        plus(LAYERS, "N15,3500,3550,,2.7"),
    ),
    layers(
        "layers_of_wells_that_are_not_there",
        "The table of layers covers more wells than the list.",
        ledger({("layers", "unknown_well", 34): 1}, layers=32),
        plus(LAYERS, "Far 1,0,500,shale,"),
    ),
    layers(
        "layers_with_depths_missing",
        "Top or base is blank, a dash or a word.",
        ledger(
            {
                ("layers", "no_depth", 34): 1,
                ("layers", "no_depth", 35): 1,
                ("layers", "not_a_number", 36): 1,
            },
            layers=32,
        ),
        plus(LAYERS, "N15,,3550,shale,", "N15,3550,-,shale,", "N15,3550,TD,shale,"),
    ),
    layers(
        "layers_in_feet_with_porosity_in_percent",
        "The table is in feet, its porosity in percent; one value can't be.",
        ledger(
            {("layers", "porosity_dropped", 3): 1},
            layers=2,
            # Corrected: 304.8 m is the base below the datum ("Depths are measured along the hole,
            # from the depth datum"); the table of layers counts from the ground, 5 m below it.
            values={("N15", "base_m"): 299.8, ("N15", "porosity"): 0.25},
        ),
        "well,top,base,lithology,porosity\nN15,0,1000,shale,25\nN15,1000,2000,sandstone,140\n",
        units={"top": "ft", "base": "ft", "porosity": "percent"},
    ),
    layers(
        "layers_with_porosity_in_percent_not_stated",
        "The porosity is in percent, and nobody said so.",
        ledger(rows("layers", "porosity_dropped", 2, 2), layers=2),
        "well,top,base,lithology,porosity\nN15,0,400,shale,25\nN15,400,900,sandstone,14\n",
    ),
    layers(
        "layers_with_neither_rock_nor_conductivity",
        "The file holds tops and bases and nothing else.",
        refused("layers.csv", "lithology", "conductivity"),
        "well,top,base\nN15,0,400\n",
    ),
]

TOPS = [
    layers(
        "tops_in_any_order",
        "Tops are listed as the geologist found them, not from above.",
        # Corrected: 3500 m from the datum is 3495 m below ground, from where the table counts.
        ledger(layers=32, values={("N15", "base_m"): 3495}),
        good_tops(),
        shape="tops",
    ),
    layers(
        "tops_of_a_well_without_total_depth",
        "Nobody noted where the hole ends, so that the deepest layer has no base.",
        ledger({("layers", "no_base", 6): 1}, layers=31),
        good_tops(),
        wells=NO_TOTAL_DEPTH,
        shape="tops",
    ),
    layers(
        "tops_below_the_end_of_the_hole",
        "The deepest top was prognosed, not drilled.",
        ledger({("layers", "no_thickness|no_base", 34): 1}, layers=32),
        plus(good_tops(), "N15,3800,granite"),
        shape="tops",
    ),
    layers(
        "tops_of_two_formations_at_one_depth",
        "A formation pinches out: its top is the top of the next.",
        ledger({("layers", "no_thickness", None): 1}, layers=32),
        plus(good_tops(), "N15,400,limestone"),
        shape="tops",
    ),
    layers(
        "tops_wide_with_formations_absent",
        "One row per well, with blanks or zeros where a formation is absent.",
        # Corrected: 700 and 980 m from the datum are 695 and 975 m below ground.
        ledger(layers=37, values={("N02", "top_m"): 695, ("N01", "base_m"): 975}),
        good_wide(),
        shape="wide",
        tops=WIDE,
    ),
    layers(
        "tops_wide_that_start_at_the_datum",
        "The shallowest formation starts at 0, and the config says that 0 is a depth.",
        ledger(layers=2, values={("N02", "top_m"): 0}),
        "well,Lower Sand,Upper Clay\nN02,400,0\n",
        shape="wide",
        tops={"Upper Clay": "shale", "Lower Sand": "sandstone"},
        zero_is_missing=[],
    ),
    layers(
        "tops_wide_with_a_name_misspelt",
        "The config names a formation otherwise than the file.",
        refused("layers.csv", "Lower Sands", "Lower Sand"),
        good_wide(),
        shape="wide",
        tops={"Lower Sands": "sandstone"},
    ),
    layers(
        "tops_of_a_shape_that_is_none",
        "A setting was written in the singular.",
        refused("inputs.layers", "shape", "top", "tops"),
        good_tops(),
        shape="top",
    ),
]

SURVEYS = [
    surveys("surveys_as_they_should_be", "Nothing to tell.", ledger(surveys=10), good_surveys()),
    surveys(
        "surveys_of_impossible_inclination",
        "An azimuth stands where the inclination should, or a sign went wrong.",
        ledger(rows("surveys", "inclination_impossible", 12, 2), surveys=10),
        plus(good_surveys(), "N12,2200,225,45", "N12,2400,-5,45"),
    ),
    surveys(
        "surveys_with_two_values_at_one_station",
        "Two surveys of one hole disagree at one depth.",
        ledger({("surveys", "station_conflict", None): None}, exact=False),
        plus(good_surveys(), "N12,2000,31,45"),
    ),
    surveys(
        "surveys_with_a_station_twice",
        "The last station of one run is the first of the next.",
        ledger({("surveys", "merged", None): 1}, surveys=10),
        plus(good_surveys(), "N12,2000,20.0,45"),
    ),
    surveys(
        "surveys_with_cells_missing",
        "A station has no depth, another no inclination that can be read; one well is unknown.",
        ledger(
            {
                ("surveys", "no_depth", 12): 1,
                ("surveys", "not_a_number", 13): 1,
                ("surveys", "unknown_well", 14): 1,
                ("surveys", "azimuth_dropped", 15): 1,
            },
            surveys=11,
        ),
        plus(good_surveys(), "N12,,21,45", "N12,2200,n.n.,45", "Far 1,10,1,45", "N12,2300,22,NE"),
    ),
    surveys(
        "surveys_with_a_total_of_remarks",
        "Further columns hold remarks, and blanks pad the names of wells.",
        ledger(surveys=10),
        with_columns(good_surveys(), "tool", "remark").replace("N12,", "N12  ,"),
    ),
]

CASES = [*INTERVALS, *TOPS, *SURVEYS]
