# From wells to maps: the grid, kriging of heat flow and of conductivity, the columns rebuilt from
# both, and how well all this predicts what it has not seen.
#
# Reads     results/{run}/wells/, results/{run}/{scenario}/tables/, .../variograms/heat_flow.json;
#           the rasters and polygons that the config names
# Writes    results/{run}/{scenario}/maps/, .../variograms/conductivity.json, .../tables/crossval/
# Settings  crs, maps, kriging, gradient, conductivity, surface_temperature, validation


rule define_grid:
    input:
        wells="results/{run}/{scenario}/tables/wells.parquet",
        readings="results/{run}/wells/readings.parquet",
        published="results/{run}/wells/heat_flow.parquet",
        rasters=[
            path for path in SECTIONS["base"]["inputs"]["rasters"].values() if path
        ],
        polygons=polygons(BASE.maps, FOLDER),
    output:
        grid="results/{run}/{scenario}/maps/grid.json",
        cells="results/{run}/{scenario}/maps/cells.parquet",
    log:
        "results/{run}/{scenario}/logs/define_grid.log",
    conda:
        "../../envs/environment.yaml"
    threads: 1
    resources:
        mem_mb=lambda wildcards, input: 2000 + 20 * int(input.size_mb),
        runtime=20,
    params:
        settings=lambda wildcards: {
            "validation": {"holdout": BASE.validation.holdout},
            **{
                key: SECTIONS[wildcards.scenario][key]
                for key in ("run", "crs", "inputs", "maps", "surface_temperature")
            },
        },
        code=code_digest("define_grid.py"),
    message:
        "Laying the grid ({wildcards.scenario})"
    script:
        "../../scripts/define_grid.py"


rule krige_heat_flow:
    input:
        map_points="results/{run}/{scenario}/tables/map_points/heat_flow.parquet",
        source_information="results/{run}/{scenario}/tables/source_information.parquet",
        variogram="results/{run}/{scenario}/variograms/heat_flow.json",
        cells="results/{run}/{scenario}/maps/cells.parquet",
    output:
        heat_flow="results/{run}/{scenario}/maps/heat_flow.parquet",
    log:
        "results/{run}/{scenario}/logs/krige_heat_flow.log",
    conda:
        "../../envs/environment.yaml"
    threads: 8
    resources:
        mem_mb=lambda wildcards, input: 2000 + 200 * int(input.size_mb),
        runtime=lambda wildcards, input: 20 + 5 * int(input.size_mb),
    params:
        engine=lambda wildcards: SETTINGS[wildcards.scenario].kriging.engine,
        drift=lambda wildcards: SETTINGS[wildcards.scenario].kriging.drift,
        code=code_digest("krige_heat_flow.py"),
    message:
        "Kriging heat flow ({wildcards.scenario})"
    script:
        "../../scripts/krige_heat_flow.py"


rule krige_conductivity:
    input:
        map_points="results/{run}/{scenario}/tables/map_points/conductivity.parquet",
        cells="results/{run}/{scenario}/maps/cells.parquet",
    output:
        variogram="results/{run}/{scenario}/variograms/conductivity.json",
        structure="results/{run}/{scenario}/maps/conductivity.parquet",
    log:
        "results/{run}/{scenario}/logs/krige_conductivity.log",
    conda:
        "../../envs/environment.yaml"
    threads: 8
    resources:
        mem_mb=lambda wildcards, input: 2000 + 200 * int(input.size_mb),
        runtime=lambda wildcards, input: 20 + 5 * int(input.size_mb),
    params:
        conductivity=lambda wildcards: {
            key: SECTIONS[wildcards.scenario]["conductivity"][key]
            for key in ("interval_m", "wells_per_interval", "below_layers")
        },
        models=lambda wildcards: SETTINGS[
            wildcards.scenario
        ].kriging.variogram.candidates,
        deepest_m=BASE.maps.deepest_m,
        code=code_digest("krige_conductivity.py"),
    message:
        "Kriging conductivity ({wildcards.scenario})"
    script:
        "../../scripts/krige_conductivity.py"


rule derive_maps:
    input:
        cells="results/{run}/{scenario}/maps/cells.parquet",
        heat_flow="results/{run}/{scenario}/maps/heat_flow.parquet",
        structure="results/{run}/{scenario}/maps/conductivity.parquet",
        variogram="results/{run}/{scenario}/variograms/conductivity.json",
        sources="results/{run}/{scenario}/tables/sources.parquet",
        source_covariance="results/{run}/{scenario}/tables/source_covariance.parquet",
    output:
        maps="results/{run}/{scenario}/maps/maps.parquet",
    log:
        "results/{run}/{scenario}/logs/derive_maps.log",
    conda:
        "../../envs/environment.yaml"
    threads: 1
    resources:
        mem_mb=lambda wildcards, input: 2000 + 50 * int(input.size_mb),
        runtime=lambda wildcards, input: 20 + int(input.size_mb),
    params:
        depths_m=BASE.maps.depths_m,
        isotherms_degc=BASE.maps.isotherms_degc,
        reference_depth_m=lambda wildcards: SETTINGS[
            wildcards.scenario
        ].gradient.reference_depth_m,
        code=code_digest("derive_maps.py"),
    message:
        "Rebuilding the temperature column of every cell ({wildcards.scenario})"
    script:
        "../../scripts/derive_maps.py"


rule cross_validate:
    input:
        map_points="results/{run}/{scenario}/tables/map_points/heat_flow.parquet",
        source_information="results/{run}/{scenario}/tables/source_information.parquet",
        heat_flow_model="results/{run}/{scenario}/variograms/heat_flow.json",
        structure="results/{run}/{scenario}/tables/map_points/conductivity.parquet",
        structure_model="results/{run}/{scenario}/variograms/conductivity.json",
        sources="results/{run}/{scenario}/tables/sources.parquet",
        source_covariance="results/{run}/{scenario}/tables/source_covariance.parquet",
        temperatures="results/{run}/{scenario}/tables/temperatures.parquet",
        wells="results/{run}/{scenario}/tables/wells.parquet",
    output:
        heat_flow="results/{run}/{scenario}/tables/crossval/heat_flow.parquet",
        temperature="results/{run}/{scenario}/tables/crossval/temperature.parquet",
        columns="results/{run}/{scenario}/tables/crossval/columns.parquet",
        scores="results/{run}/{scenario}/tables/crossval/scores.json",
    log:
        "results/{run}/{scenario}/logs/cross_validate.log",
    conda:
        "../../envs/environment.yaml"
    threads: 1
    resources:
        mem_mb=lambda wildcards, input: 2000 + 500 * int(input.size_mb),
        runtime=lambda wildcards, input: 20 + 20 * int(input.size_mb),
    params:
        conductivity=lambda wildcards: {
            key: SECTIONS[wildcards.scenario]["conductivity"][key]
            for key in ("interval_m", "wells_per_interval", "below_layers")
        },
        maps={key: SECTIONS["base"]["maps"][key] for key in ("depths_m", "deepest_m")},
        validation=SECTIONS["base"]["validation"],
        drift=lambda wildcards: SETTINGS[wildcards.scenario].kriging.drift,
        code=code_digest("cross_validate.py"),
    message:
        "Judging the maps by what they have not seen ({wildcards.scenario})"
    script:
        "../../scripts/cross_validate.py"
