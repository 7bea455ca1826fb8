# What is handed over: rasters, GeoPackage, report, and a manifest of it all.
#
# Reads     results/{run}/wells/, results/{run}/{scenario}/tables/, .../maps/, .../variograms/
# Writes    results/{run}/{scenario}/delivery/, complete in itself
# Settings  all, to say what the maps were made with


rule write_rasters:
    input:
        maps="results/{run}/{scenario}/maps/maps.parquet",
        grid="results/{run}/{scenario}/maps/grid.json",
    output:
        rasters=expand(
            "results/{run}/{scenario}/delivery/rasters/{file}",
            file=RASTERS,
            allow_missing=True,
        ),
    log:
        "results/{run}/{scenario}/logs/write_rasters.log",
    conda:
        "../../envs/environment.yaml"
    threads: 1
    resources:
        mem_mb=lambda wildcards, input: 2000 + 3 * int(input.size_mb),
        runtime=20,
    params:
        settings=lambda wildcards: {
            key: SECTIONS[wildcards.scenario][key]
            for key in (
                "run",
                "crs",
                "inputs",
                "correction",
                "gradient",
                "maps",
                "credits",
            )
        },
        code=code_digest("write_rasters.py"),
    message:
        "Writing rasters ({wildcards.scenario})"
    script:
        "../../scripts/write_rasters.py"


rule write_geopackage:
    input:
        maps="results/{run}/{scenario}/maps/maps.parquet",
        grid="results/{run}/{scenario}/maps/grid.json",
        wells="results/{run}/{scenario}/tables/wells.parquet",
        temperatures="results/{run}/{scenario}/tables/temperatures.parquet",
        gradients="results/{run}/{scenario}/tables/gradients.parquet",
        heat_flow="results/{run}/{scenario}/tables/heat_flow.parquet",
        rejected=[
            "results/{run}/wells/rejected.parquet",
            "results/{run}/{scenario}/tables/rejected.parquet",
            "results/{run}/{scenario}/tables/rejected_layers.parquet",
        ],
    output:
        geopackage="results/{run}/{scenario}/delivery/{run}.gpkg",
    log:
        "results/{run}/{scenario}/logs/write_geopackage.log",
    conda:
        "../../envs/environment.yaml"
    threads: 1
    resources:
        mem_mb=lambda wildcards, input: 2000 + 3 * int(input.size_mb),
        runtime=20,
    params:
        settings=lambda wildcards: {
            key: SECTIONS[wildcards.scenario][key]
            for key in (
                "run",
                "crs",
                "inputs",
                "correction",
                "gradient",
                "maps",
                "credits",
            )
        },
        code=code_digest("write_geopackage.py"),
    message:
        "Writing the GeoPackage ({wildcards.scenario})"
    script:
        "../../scripts/write_geopackage.py"


rule write_report:
    input:
        maps="results/{run}/{scenario}/maps/maps.parquet",
        grid="results/{run}/{scenario}/maps/grid.json",
        wells="results/{run}/{scenario}/tables/wells.parquet",
        readings="results/{run}/wells/readings.parquet",
        layers="results/{run}/wells/layers.parquet",
        rejected="results/{run}/wells/rejected.parquet",
        first_look="results/{run}/wells/first_look.json",
        rejected_later=[
            "results/{run}/{scenario}/tables/rejected.parquet",
            "results/{run}/{scenario}/tables/rejected_layers.parquet",
        ],
        temperatures="results/{run}/{scenario}/tables/temperatures.parquet",
        correction_summary="results/{run}/{scenario}/tables/correction_summary.parquet",
        anchor_differences="results/{run}/{scenario}/tables/anchor_differences.parquet",
        intercepts="results/{run}/{scenario}/tables/intercepts.parquet",
        method_sigmas="results/{run}/{scenario}/tables/method_sigmas.parquet",
        resistances="results/{run}/{scenario}/tables/resistances.parquet",
        heat_flow="results/{run}/{scenario}/tables/heat_flow.parquet",
        sources="results/{run}/{scenario}/tables/sources.parquet",
        recovery="results/{run}/{scenario}/tables/recovery.json",
        calibration="results/{run}/{scenario}/tables/calibration.parquet",
        crossval_heat_flow="results/{run}/{scenario}/tables/crossval/heat_flow.parquet",
        crossval_temperature="results/{run}/{scenario}/tables/crossval/temperature.parquet",
        scores="results/{run}/{scenario}/tables/crossval/scores.json",
        heat_flow_model="results/{run}/{scenario}/variograms/heat_flow.json",
        structure_model="results/{run}/{scenario}/variograms/conductivity.json",
        catalogue=lambda wildcards: catalogue_file(
            SECTIONS[wildcards.scenario]["conductivity"]["catalogue"]
        ),
        templates=data_files("report/templates"),
    output:
        report="results/{run}/{scenario}/delivery/report.html",
    log:
        "results/{run}/{scenario}/logs/write_report.log",
    conda:
        "../../envs/environment.yaml"
    threads: 1
    resources:
        mem_mb=lambda wildcards, input: 2000 + 50 * int(input.size_mb),
        runtime=20,
    params:
        settings=lambda wildcards: SETTINGS[wildcards.scenario].model_dump(
            mode="json", exclude={"scenarios"}
        ),
        code=code_digest("write_report.py"),
    message:
        "Drawing and writing the report ({wildcards.scenario})"
    script:
        "../../scripts/write_report.py"


rule write_well_pages:
    input:
        wells="results/{run}/{scenario}/tables/wells.parquet",
        readings="results/{run}/wells/readings.parquet",
        layers="results/{run}/wells/layers.parquet",
        rejected="results/{run}/wells/rejected.parquet",
        rejected_later=[
            "results/{run}/{scenario}/tables/rejected.parquet",
            "results/{run}/{scenario}/tables/rejected_layers.parquet",
        ],
        estimates="results/{run}/{scenario}/tables/estimates.parquet",
        temperatures="results/{run}/{scenario}/tables/temperatures.parquet",
        closure="results/{run}/{scenario}/tables/crossval/temperature.parquet",
        columns="results/{run}/{scenario}/tables/crossval/columns.parquet",
        sources="results/{run}/{scenario}/tables/sources.parquet",
        recovery="results/{run}/{scenario}/tables/recovery.json",
        catalogue=lambda wildcards: catalogue_file(
            SECTIONS[wildcards.scenario]["conductivity"]["catalogue"]
        ),
        formations=lambda wildcards: formation_tables(
            SECTIONS[wildcards.scenario]["conductivity"]
        ),
        templates=data_files("wellpages/templates") + data_files("report/templates"),
    output:
        page="results/{run}/{scenario}/delivery/wells.html",
    log:
        "results/{run}/{scenario}/logs/write_well_pages.log",
    conda:
        "../../envs/environment.yaml"
    threads: 1
    resources:
        mem_mb=lambda wildcards, input: 2000 + 50 * int(input.size_mb),
        runtime=20,
    params:
        settings=lambda wildcards: {
            section: {key: SECTIONS[wildcards.scenario][section][key] for key in keys}
            for section, keys in (
                (
                    "correction",
                    (
                        "circulation_h",
                        "diffusivity_m2_s",
                        "hole_radius_m",
                        "reading_std_k",
                    ),
                ),
                ("conductivity", ("lithologies", "formations", "laws", "overrides")),
                ("validation", ("holdout",)),
                ("report", ("wells_drawn",)),
            )
        },
        code=code_digest("write_well_pages.py"),
    message:
        "Drawing the wells ({wildcards.scenario})"
    script:
        "../../scripts/write_well_pages.py"


rule write_manifest:
    input:
        rasters=expand(
            "results/{run}/{scenario}/delivery/rasters/{file}",
            file=RASTERS,
            allow_missing=True,
        ),
        geopackage="results/{run}/{scenario}/delivery/{run}.gpkg",
        report="results/{run}/{scenario}/delivery/report.html",
        wells="results/{run}/{scenario}/delivery/wells.html",
        grid="results/{run}/{scenario}/maps/grid.json",
        rejected=[
            "results/{run}/wells/rejected.parquet",
            "results/{run}/{scenario}/tables/rejected.parquet",
            "results/{run}/{scenario}/tables/rejected_layers.parquet",
        ],
        files=lambda wildcards: input_files(SETTINGS[wildcards.scenario], FOLDER),
    output:
        manifest="results/{run}/{scenario}/delivery/manifest.json",
        readme="results/{run}/{scenario}/delivery/README.txt",
        rejected="results/{run}/{scenario}/delivery/rejected.csv",
    log:
        "results/{run}/{scenario}/logs/write_manifest.log",
    conda:
        "../../envs/environment.yaml"
    threads: 1
    resources:
        mem_mb=1000,
        runtime=10,
    params:
        settings=lambda wildcards: SETTINGS[wildcards.scenario].model_dump(
            mode="json", exclude={"scenarios"}
        ),
        folder=lambda wildcards: FOLDER,
        code=code_digests(),
    message:
        "Closing the delivery with its manifest ({wildcards.scenario})"
    script:
        "../../scripts/write_manifest.py"
