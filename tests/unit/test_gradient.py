"""Promises of the wells' gradients."""

import numpy as np
import pandas as pd
import pytest

from basinheat import gradient, tables

RNG = np.random.default_rng(5)


def _temperatures(rows):
    return tables.Temperatures.conform(
        pd.DataFrame(
            rows,
            columns=[
                "well",
                "depth_m",
                "temperature_degc",
                "temperature_std_k",
                "well_std_k",
                "shared_std_k",
                "method",
            ],
        )
    )


def _wells(names, degc=10.0, std=1.3):
    return tables.Wells.conform(
        pd.DataFrame(
            {"well": names, "surface_temperature_degc": degc, "surface_temperature_std_k": std}
        )
    )


def _dense(rows, surface, surface_std):
    """Generalised least squares with the whole covariance, as the textbook writes it."""
    _, depth, degc, std, common, shared, method = (np.array(c) for c in zip(*rows, strict=True))
    n = len(depth)
    own = np.diag(np.append(std.astype(float) ** 2, surface_std**2))
    own[:n, :n] += np.outer(common, common)
    bias = np.zeros_like(own)
    bias[:n, :n] = np.outer(shared, shared) * (method[:, None] == method[None, :])
    design = np.column_stack([np.ones(n + 1), np.append(depth / 1000, 0.0)])
    inverse = np.linalg.inv(own + bias)
    weights = np.linalg.inv(design.T @ inverse @ design) @ design.T @ inverse
    beta = weights @ np.append(degc, surface)
    return (
        beta,
        np.sqrt((weights @ own @ weights.T)[1, 1]),
        np.sqrt((weights @ bias @ weights.T)[1, 1]),
    )


def test_equals_the_dense_solution():
    rows = []
    for well, n in (("A", 1), ("B", 4), ("C", 7)):
        for i in range(n):
            depth = float(RNG.uniform(500, 4000))
            rows.append(
                (
                    well,
                    depth,
                    10 + 0.03 * depth + float(RNG.normal(0, 4)),
                    float(RNG.uniform(1, 5)),
                    float(RNG.uniform(0, 3)),
                    [0.8, 2.0, 0.0][i % 3],
                    ["horner", "harrison1983", "equilibrium"][i % 3],
                )
            )
    out = gradient.fit_wells(_temperatures(rows), _wells(["A", "B", "C"])).set_index("well")
    for well in "ABC":
        mine = sorted(r for r in rows if r[0] == well)
        beta, own, shared = _dense(mine, 10.0, 1.3)
        row = out.loc[well]
        assert row[["intercept_degc", "gradient_k_km"]].tolist() == pytest.approx(beta.tolist())
        assert row["gradient_std_k_km"] == pytest.approx(own)
        assert row["gradient_shared_std_k_km"] == pytest.approx(shared)
        assert row["n_points"] == len(mine)
    assert out.loc["C", "method"] == "equilibrium;harrison1983;horner"


def test_exact_line_is_found_again():
    rows = [("A", z, 8.0 + 0.027 * z, 2.0, 1.0, 1.0, "horner") for z in (700.0, 1500.0, 3300.0)]
    out = gradient.fit_wells(_temperatures(rows), _wells(["A"], degc=8.0)).iloc[0]
    assert out["gradient_k_km"] == pytest.approx(27.0)
    assert out["intercept_degc"] == pytest.approx(8.0)
    assert (out["top_m"], out["base_m"]) == (700.0, 3300.0)


def test_shared_errors_do_not_average_away():
    """With ever more readings the own part falls, the method's bias stays."""
    found = []
    for n in (1, 100):
        rows = [("A", 3000.0, 100.0, 5.0, 0.0, 2.0, "horner")] * n
        found.append(gradient.fit_wells(_temperatures(rows), _wells(["A"], std=0.1)).iloc[0])
    assert found[1]["gradient_std_k_km"] < 0.2 * found[0]["gradient_std_k_km"]
    assert found[1]["gradient_shared_std_k_km"] == pytest.approx(2.0 / 3.0, rel=0.01)


def test_order_of_rows_does_not_matter_and_no_rows_give_no_gradients():
    rows = [(w, z, 10 + 0.03 * z, 2.0, 1.0, 1.0, "horner") for w in "BA" for z in (900.0, 2500.0)]
    wells = _wells(["B", "A", "unused"])
    forward = gradient.fit_wells(_temperatures(rows), wells)
    backward = gradient.fit_wells(_temperatures(rows[::-1]), wells)
    pd.testing.assert_frame_equal(forward, backward)
    assert gradient.fit_wells(_temperatures([]), wells).empty
