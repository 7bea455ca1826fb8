# Wells and readings, from the files of the config to clean tables.
#
# Reads     the input tables, decisions and rasters that the config names
# Writes    results/{run}/wells/: wells, readings, layers, heat_flow, rejected (for all scenarios);
#           findings: all flags and refusals of screening; decisions_template: a form to answer them;
#           first_look: what the inputs hold, as record, page and text
#           results/{run}/{scenario}/tables/wells.parquet: with surface temperatures
# Settings  run, crs, inputs, screening, surface_temperature, heat_flow (published_*),
#           correction (reading_std_k, same_depth_m); conductivity (names of rock), to tell which
#           rocks are not known


rule prepare_wells:
    input:
        tables=input_tables(BASE.inputs, FOLDER),
        elevation=SECTIONS["base"]["inputs"]["rasters"]["elevation"] or [],
        surface=SECTIONS["base"]["inputs"]["rasters"]["surface_temperature"] or [],
    output:
        wells="results/{run}/wells/wells.parquet",
        readings="results/{run}/wells/readings.parquet",
        layers="results/{run}/wells/layers.parquet",
        heat_flow="results/{run}/wells/heat_flow.parquet",
        rejected="results/{run}/wells/rejected.parquet",
        rejected_csv="results/{run}/wells/rejected.csv",
        findings="results/{run}/wells/findings.parquet",
        findings_csv="results/{run}/wells/findings.csv",
        decisions_template="results/{run}/wells/decisions_template.csv",
    log:
        "results/{run}/logs/prepare_wells.log",
    conda:
        "../../envs/environment.yaml"
    threads: 1
    resources:
        mem_mb=lambda wildcards, input: 1000 + 40 * int(input.size_mb),
        runtime=lambda wildcards, input: 10 + int(input.size_mb) // 5,
    params:
        settings=BASE.model_dump(
            mode="json",
            include={
                **dict.fromkeys(
                    ("run", "crs", "inputs", "screening", "surface_temperature"),
                    True,
                ),
                "heat_flow": {
                    "published_std_share",
                    "published_within_km",
                    "published_low_mw_m2",
                    "published_high_mw_m2",
                },
                "correction": {"reading_std_k", "same_depth_m"},
            },
        ),
        folder=lambda wildcards: FOLDER,
        code=code_digest("prepare_wells.py"),
    message:
        "Reading and screening wells, readings and layers"
    script:
        "../../scripts/prepare_wells.py"


rule look_at_inputs:
    input:
        tables=input_tables(BASE.inputs, FOLDER),
        wells="results/{run}/wells/wells.parquet",
        readings="results/{run}/wells/readings.parquet",
        rejected="results/{run}/wells/rejected.parquet",
        surface=SECTIONS["base"]["inputs"]["rasters"]["surface_temperature"] or [],
        catalogue=catalogue_file(SECTIONS["base"]["conductivity"]["catalogue"]),
        formations=formation_tables(SECTIONS["base"]["conductivity"]),
        templates=[*data_files("firstlook/templates"), *data_files("report/templates")],
    output:
        record="results/{run}/wells/first_look.json",
        page="results/{run}/wells/first_look.html",
        text="results/{run}/wells/first_look.txt",
    log:
        "results/{run}/logs/look_at_inputs.log",
    conda:
        "../../envs/environment.yaml"
    threads: 1
    resources:
        mem_mb=lambda wildcards, input: 1000 + 40 * int(input.size_mb),
        runtime=lambda wildcards, input: 10 + int(input.size_mb) // 5,
    params:
        settings=BASE.model_dump(
            mode="json",
            include={
                **dict.fromkeys(
                    ("run", "crs", "inputs", "screening", "surface_temperature"),
                    True,
                ),
            },
        )
        | {
            "conductivity": {
                name: SECTIONS["base"]["conductivity"][name]
                for name in ("lithologies", "formations", "overrides")
            }
        },
        folder=lambda wildcards: FOLDER,
        code=code_digest("look_at_inputs.py"),
    message:
        "Looking at what the inputs hold"
    script:
        "../../scripts/look_at_inputs.py"


rule assign_surface_temperature:
    input:
        wells="results/{run}/wells/wells.parquet",
        raster=lambda wildcards: SECTIONS[wildcards.scenario]["inputs"]["rasters"][
            "surface_temperature"
        ]
        or [],
    output:
        wells="results/{run}/{scenario}/tables/wells.parquet",
    log:
        "results/{run}/{scenario}/logs/assign_surface_temperature.log",
    conda:
        "../../envs/environment.yaml"
    threads: 1
    resources:
        mem_mb=lambda wildcards, input: 500 + 20 * int(input.size_mb),
        runtime=10,
    params:
        surface_temperature=lambda wildcards: SECTIONS[wildcards.scenario][
            "surface_temperature"
        ],
        crs=BASE.crs,
        code=code_digest("assign_surface_temperature.py"),
    message:
        "Surface temperature of the wells ({wildcards.scenario})"
    script:
        "../../scripts/assign_surface_temperature.py"
