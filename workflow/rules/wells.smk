# Wells and readings, from the files of the config to clean tables.
#
# Reads     the input tables, decisions and rasters that the config names
# Writes    results/{run}/wells/: wells, readings, layers, rejected (the same for all scenarios)
#           results/{run}/{scenario}/tables/wells.parquet: with surface temperatures
# Settings  crs, inputs, screening, correction (reading_std_k, same_depth_m); surface_temperature


rule prepare_wells:
    input:
        tables=input_tables(BASE.inputs, FOLDER),
        elevation=SECTIONS["base"]["inputs"]["rasters"]["elevation"] or [],
        surface=SECTIONS["base"]["inputs"]["rasters"]["surface_temperature"] or [],
    output:
        wells="results/{run}/wells/wells.parquet",
        readings="results/{run}/wells/readings.parquet",
        layers="results/{run}/wells/layers.parquet",
        rejected="results/{run}/wells/rejected.parquet",
        rejected_csv="results/{run}/wells/rejected.csv",
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
                "correction": {"reading_std_k", "same_depth_m"},
            },
        ),
        folder=lambda wildcards: FOLDER,
        code=code_digest("prepare_wells.py"),
    message:
        "Reading and screening wells, readings and layers"
    script:
        "../../scripts/prepare_wells.py"


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
