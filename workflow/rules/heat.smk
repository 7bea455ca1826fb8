# From readings to heat flow: correction, rock, and the one fit of all shared sources of error.
#
# Reads     results/{run}/wells/, results/{run}/{scenario}/tables/wells.parquet
# Writes    results/{run}/{scenario}/tables/, .../variograms/heat_flow.json
# Settings  correction, conductivity, heat_flow, kriging.variogram, kriging.drift,
#           surface_temperature, validation.holdout


rule correct_temperatures:
    input:
        readings="results/{run}/wells/readings.parquet",
        wells="results/{run}/{scenario}/tables/wells.parquet",
    output:
        estimates="results/{run}/{scenario}/tables/estimates.parquet",
        sources="results/{run}/{scenario}/tables/correction_sources.parquet",
        rejected="results/{run}/{scenario}/tables/rejected.parquet",
        calibration="results/{run}/{scenario}/tables/calibration.parquet",
        recovery="results/{run}/{scenario}/tables/recovery.json",
    log:
        "results/{run}/{scenario}/logs/correct_temperatures.log",
    conda:
        "../../envs/environment.yaml"
    threads: 1
    resources:
        mem_mb=lambda wildcards, input: 1000 + 100 * int(input.size_mb),
        runtime=lambda wildcards, input: 10 + 5 * int(input.size_mb),
    params:
        correction=lambda wildcards: SECTIONS[wildcards.scenario]["correction"],
        holdout=BASE.validation.holdout,
        surface_shared_std_k=lambda wildcards: SETTINGS[
            wildcards.scenario
        ].surface_temperature.shared_std_k,
        code=code_digest("correct_temperatures.py"),
    message:
        "Correcting readings to formation temperatures ({wildcards.scenario})"
    script:
        "../../scripts/correct_temperatures.py"


rule estimate_resistances:
    input:
        estimates="results/{run}/{scenario}/tables/estimates.parquet",
        wells="results/{run}/{scenario}/tables/wells.parquet",
        layers="results/{run}/wells/layers.parquet",
        catalogue=lambda wildcards: catalogue_file(
            SECTIONS[wildcards.scenario]["conductivity"]["catalogue"]
        ),
        formations=lambda wildcards: formation_tables(
            SECTIONS[wildcards.scenario]["conductivity"]
        ),
    output:
        resistances="results/{run}/{scenario}/tables/resistances.parquet",
        structure="results/{run}/{scenario}/tables/map_points/conductivity.parquet",
        sources="results/{run}/{scenario}/tables/conductivity_sources.parquet",
        rejected="results/{run}/{scenario}/tables/rejected_layers.parquet",
    log:
        "results/{run}/{scenario}/logs/estimate_resistances.log",
    conda:
        "../../envs/environment.yaml"
    threads: 1
    resources:
        mem_mb=lambda wildcards, input: 1000 + 100 * int(input.size_mb),
        runtime=lambda wildcards, input: 10 + 5 * int(input.size_mb),
    params:
        conductivity=lambda wildcards: SECTIONS[wildcards.scenario]["conductivity"],
        heat_flow=lambda wildcards: SECTIONS[wildcards.scenario]["heat_flow"],
        holdout=BASE.validation.holdout,
        code=code_digest("estimate_resistances.py"),
    message:
        "Thermal resistance of the rock above each temperature ({wildcards.scenario})"
    script:
        "../../scripts/estimate_resistances.py"


rule fit_sources:
    input:
        estimates="results/{run}/{scenario}/tables/estimates.parquet",
        resistances="results/{run}/{scenario}/tables/resistances.parquet",
        sources=[
            "results/{run}/{scenario}/tables/correction_sources.parquet",
            "results/{run}/{scenario}/tables/conductivity_sources.parquet",
        ],
        wells="results/{run}/{scenario}/tables/wells.parquet",
        published="results/{run}/wells/heat_flow.parquet",
        pinned=lambda wildcards: SECTIONS[wildcards.scenario]["kriging"]["variogram"][
            "pinned"
        ]
        or [],
    output:
        sources="results/{run}/{scenario}/tables/sources.parquet",
        source_covariance="results/{run}/{scenario}/tables/source_covariance.parquet",
        source_information="results/{run}/{scenario}/tables/source_information.parquet",
        temperatures="results/{run}/{scenario}/tables/temperatures.parquet",
        heat_flow="results/{run}/{scenario}/tables/heat_flow.parquet",
        map_points="results/{run}/{scenario}/tables/map_points/heat_flow.parquet",
        variogram="results/{run}/{scenario}/variograms/heat_flow.json",
    log:
        "results/{run}/{scenario}/logs/fit_sources.log",
    conda:
        "../../envs/environment.yaml"
    threads: 1
    resources:
        mem_mb=lambda wildcards, input: 1000 + 1000 * int(input.size_mb),
        runtime=lambda wildcards, input: 20 + 20 * int(input.size_mb),
    params:
        options=lambda wildcards: {
            "models": SETTINGS[wildcards.scenario].kriging.variogram.candidates,
            "surface_shared_std_k": SETTINGS[
                wildcards.scenario
            ].surface_temperature.shared_std_k,
            "regional_mw_m2": SETTINGS[wildcards.scenario].heat_flow.regional_mw_m2,
            "published_shared_share": SETTINGS[
                wildcards.scenario
            ].heat_flow.published_shared_share,
            "holdout": tuple(BASE.validation.holdout),
            "trend": SETTINGS[wildcards.scenario].kriging.drift,
        },
        code=code_digest("fit_sources.py"),
    message:
        "Fitting heat flow and all shared errors together ({wildcards.scenario})"
    script:
        "../../scripts/fit_sources.py"


rule fit_gradients:
    input:
        temperatures="results/{run}/{scenario}/tables/temperatures.parquet",
        wells="results/{run}/{scenario}/tables/wells.parquet",
    output:
        gradients="results/{run}/{scenario}/tables/gradients.parquet",
    log:
        "results/{run}/{scenario}/logs/fit_gradients.log",
    conda:
        "../../envs/environment.yaml"
    threads: 1
    resources:
        mem_mb=lambda wildcards, input: 500 + 50 * int(input.size_mb),
        runtime=10,
    params:
        code=code_digest("fit_gradients.py"),
    message:
        "Gradients of the wells ({wildcards.scenario})"
    script:
        "../../scripts/fit_gradients.py"


rule compare_corrections:
    input:
        readings="results/{run}/wells/readings.parquet",
        wells="results/{run}/{scenario}/tables/wells.parquet",
        estimates="results/{run}/{scenario}/tables/estimates.parquet",
        temperatures="results/{run}/{scenario}/tables/temperatures.parquet",
        resistances="results/{run}/{scenario}/tables/resistances.parquet",
        sources="results/{run}/{scenario}/tables/sources.parquet",
        source_covariance="results/{run}/{scenario}/tables/source_covariance.parquet",
        variogram="results/{run}/{scenario}/variograms/heat_flow.json",
    output:
        comparison="results/{run}/{scenario}/tables/correction_comparison.parquet",
        summary="results/{run}/{scenario}/tables/correction_summary.parquet",
        anchors="results/{run}/{scenario}/tables/anchor_differences.parquet",
        intercepts="results/{run}/{scenario}/tables/intercepts.parquet",
        sigmas="results/{run}/{scenario}/tables/method_sigmas.parquet",
    log:
        "results/{run}/{scenario}/logs/compare_corrections.log",
    conda:
        "../../envs/environment.yaml"
    threads: 1
    resources:
        mem_mb=lambda wildcards, input: 1000 + 100 * int(input.size_mb),
        runtime=lambda wildcards, input: 10 + 5 * int(input.size_mb),
    params:
        correction=lambda wildcards: SECTIONS[wildcards.scenario]["correction"],
        holdout=BASE.validation.holdout,
        surface_shared_std_k=lambda wildcards: SETTINGS[
            wildcards.scenario
        ].surface_temperature.shared_std_k,
        code=code_digest("compare_corrections.py"),
    message:
        "Comparing all correction methods ({wildcards.scenario})"
    script:
        "../../scripts/compare_corrections.py"
