"""Well temperatures to maps of geothermal gradient, heat flow and temperature at depth.

The config is checked here, whole and before any job; README.md and config/README.md explain it.
"""

import sys
from pathlib import Path

ROOT = Path(workflow.basedir)
sys.path.insert(0, str(ROOT / "scripts"))

from basinheat.mapnames import map_names, raster_files
from basinheat.provenance import code_digest, code_digests
from basinheat.settings.files import (
    catalogue_file,
    data_files,
    formation_tables,
    input_files,
    input_tables,
    nearby,
    polygons,
    with_paths,
)
from basinheat.settings.load import load_or_exit

# The demo is the default, and only without a config of the user's: `configfile:` merges.
if not workflow.configfiles:

    configfile: str(ROOT / "config" / "config.yaml")


FOLDER = nearby(Path(workflow.configfiles[-1]).parent)
SETTINGS = load_or_exit(
    config,
    nearby(workflow.configfiles[-1]),
    FOLDER,
    check_files=workflow.is_main_process,
)
# What rules take as params: plain values, so that Snakemake can compare them with the last run's.
SECTIONS = {name: with_paths(settings, FOLDER) for name, settings in SETTINGS.items()}
BASE = SETTINGS["base"]
RASTERS = raster_files(map_names(BASE.maps.depths_m, BASE.maps.isotherms_degc))


wildcard_constraints:
    run=BASE.run,
    scenario="|".join(SETTINGS),


include: "workflow/rules/wells.smk"
include: "workflow/rules/heat.smk"
include: "workflow/rules/maps.smk"
include: "workflow/rules/delivery.smk"


rule all:
    default_target: True
    input:
        expand(
            "results/{run}/{scenario}/delivery/manifest.json",
            run=BASE.run,
            scenario=SETTINGS,
        ),


# Read and screen only: what the files hold and what was refused, before anything is mapped.
# A rule without output runs whenever it is asked for, so the text is printed each time.
rule first_look:
    input:
        text=f"results/{BASE.run}/wells/first_look.txt",
        page=f"results/{BASE.run}/wells/first_look.html",
    log:
        f"results/{BASE.run}/logs/first_look.log",
    localrule: True
    conda:
        "envs/environment.yaml"
    message:
        "What the inputs hold, also as a page: {input.page}"
    shell:
        "cat {input.text:q} 2> {log:q}"


onsuccess:
    results = Path.cwd() / "results" / BASE.run
    places = [
        results / "wells",
        *(results / name / "delivery" for name in SETTINGS),
    ]
    print(
        "Done. Look at:",
        *(nearby(place) for place in places if place.exists()),
        sep="\n  ",
    )
