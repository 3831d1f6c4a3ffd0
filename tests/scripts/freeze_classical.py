"""Freezes classical Student-t results of statsmodels and SciPy as a fixture, so that the tests need no Python.

    python3 -m venv VENV && VENV/bin/pip install numpy scipy statsmodels
    VENV/bin/python freeze_classical.py

Under a flat prior the posterior of a linear curve has the classical t intervals; a quality team that recomputes with a
common statistics library must find the same numbers.
"""

import csv
import json
import pathlib
import platform

import numpy as np
import scipy
import scipy.stats
import statsmodels
import statsmodels.api as sm

FIXTURES = pathlib.Path(__file__).resolve().parent.parent / "fixtures"
TOLERANCE = 1e-9


def relative(path, value, magnitude=None):
    magnitude = abs(value) if magnitude is None else magnitude
    return {
        "path": path,
        "kind": "relative",
        "value": repr(float(value)),
        "tolerance": TOLERANCE,
        "magnitude": repr(float(magnitude)),
    }


def spread(paths, values):
    """A list, relative to the largest magnitude in it."""
    largest = max(abs(float(v)) for v in values)
    return [relative(path, value, largest) for path, value in zip(paths, values)]


def interval(path, ends):
    return spread([f"{path}[0]", f"{path}[1]"], ends)


def coefficients(result, coverage):
    p = len(result.params)
    expect = spread([f"fit.terms[{i}].estimate" for i in range(p)], result.params)
    expect += [relative(f"fit.terms[{i}].scale", result.bse[i]) for i in range(p)]
    for i, ends in enumerate(result.conf_int(alpha=1 - coverage)):
        expect += interval(f"fit.terms[{i}].interval", ends)
    dof = result.df_resid
    s = np.sqrt(result.scale)
    expect.append(relative("fit.noise.estimate", s))
    tail = (1 - coverage) / 2
    expect += interval("fit.noise.interval", s * np.sqrt(dof / scipy.stats.chi2.ppf([1 - tail, tail], dof)))
    expect.append({"path": "fit.degrees_of_freedom", "kind": "is", "value": int(dof)})
    return expect


def predictions(result, rows, coverage):
    frame = result.get_prediction(np.asarray(rows, float)).summary_frame(alpha=1 - coverage)
    expect = []
    for k in range(len(rows)):
        entry = frame.iloc[k]
        expect.append(relative(f"at[{k}].curve.estimate", entry["mean"]))
        expect.append(relative(f"at[{k}].curve.scale", entry["mean_se"]))
        expect += interval(f"at[{k}].curve.interval", (entry["mean_ci_lower"], entry["mean_ci_upper"]))
        expect += interval(f"at[{k}].indication.interval", (entry["obs_ci_lower"], entry["obs_ci_upper"]))
    return expect


def diagnostics(result, count):
    """Residuals, leverages, Cook's distances, left-out tails of the first rows."""
    influence = result.get_influence()
    outside = influence.resid_studentized_external
    tails = scipy.stats.t.cdf(outside, result.df_resid - 1)
    expect = spread([f"points[{i}].residual" for i in range(count)], result.resid[:count])
    for field, values in (
        ("leverage", influence.hat_matrix_diag),
        ("cook_distance", influence.cooks_distance[0]),
        ("left_out_tail", tails),
    ):
        expect += spread([f"points[{i}].{field}" for i in range(count)], values[:count])
    return expect


def columns(name):
    with open(FIXTURES / "data" / f"{name}.csv", encoding="utf-8") as file:
        rows = list(csv.DictReader(file))
    return {key: [row[key] for row in rows] for key in rows[0]}


def body_fat():
    """K. W. Penrose et al. 1985: 252 abdomen circumferences and body-fat percentages."""
    data = columns("bodyfat")
    x, y = (np.array(list(map(float, data[key]))) for key in ("abdomen_cm", "bodyfat_pct"))
    shapes = {
        "line": (["1", "x"], lambda a: [1, a], 0.95),
        "parabola about 90 cm": (["1", "x-90", "(x-90)^2"], lambda a: [1, a - 90, (a - 90) ** 2], 0.9),
        "logarithm": (["1", "ln(x)"], lambda a: [1, np.log(a)], 0.99),
        "root and reciprocal": (["1", "sqrt(x)", "1/x"], lambda a: [1, np.sqrt(a), 1 / a], 0.6827),
    }
    for name, (terms, row, coverage) in shapes.items():
        result = sm.OLS(y, np.array([row(a) for a in x], float)).fit(method="qr")
        places = [70.0, 95.5, 130.0]
        yield {
            "name": f"body fat, {name}",
            "source": "K. W. Penrose et al. 1985, as distributed with several statistics texts",
            "data": {"csv": "data/bodyfat.csv", "reference": "abdomen_cm", "indication": "bodyfat_pct"},
            "visit": {"points": [], "model": {"terms": terms}, "coverage": coverage, "ask": {"at": places}},
            "expect": coefficients(result, coverage)
            + predictions(result, [row(a) for a in places], coverage)
            + diagnostics(result, 60),
        }


def birds():
    """Extinction times of 62 bird species: three explanatory quantities and a product."""
    data = columns("birdextinct")
    values = {key: np.array(list(map(float, data[key]))) for key in ("time", "nesting", "size", "status")}

    def row(nesting, size, status):
        return [1, nesting, size, status, nesting * size]

    design = np.array([row(*r) for r in zip(values["nesting"], values["size"], values["status"])])
    result = sm.OLS(values["time"], design).fit(method="qr")
    places = [(2.5, 0, 1), (6.0, 1, 1), (8.0, 1, 0)]
    yield {
        "name": "bird extinction times on nesting pairs, size and status",
        "source": "F. Ramsey and D. Schafer, The Statistical Sleuth",
        "data": {
            "csv": "data/birdextinct.csv",
            "reference": "nesting",
            "indication": "time",
            "influences": ["size", "status"],
        },
        "visit": {
            "points": [],
            "instrument": {"influences": {"size": {"unit": ""}, "status": {"unit": ""}}},
            "model": {"terms": ["1", "x", "size", "status", "x*size"]},
            "coverage": 0.95,
            "conditions": {"size": 0, "status": 1},
            "ask": {"at": [{"x": x, "influences": {"size": size, "status": status}} for x, size, status in places]},
        },
        "expect": coefficients(result, 0.95)
        + predictions(result, [row(*place) for place in places], 0.95)
        + diagnostics(result, 62),
    }


def weighted():
    """Means of m indications: weighted least squares with weights m. Invented data."""
    x = np.array([0.0, 2.0, 4.0, 6.0, 8.0, 10.0, 12.0])
    y = np.array([4.012, 6.688, 9.331, 12.018, 14.642, 17.355, 19.998])
    m = np.array([1, 3, 3, 5, 3, 3, 1])
    result = sm.WLS(y, np.array([[1, a] for a in x]), weights=m).fit(method="qr")
    yield {
        "name": "transmitter, means of unequal numbers of indications",
        "source": "invented",
        "visit": {
            "points": [
                {"reference": a, "indication": b, "repeats": int(c)} for a, b, c in zip(x.tolist(), y.tolist(), m)
            ],
            "instrument": {"unit": "bar", "range": [0, 12], "output": {"unit": "mA"}},
            "model": {"terms": ["1", "x"]},
            "coverage": 0.95,
            "ask": {"at": [1.0, 7.0, 12.0]},
        },
        "expect": coefficients(result, 0.95) + predictions(result, [[1, 1.0], [1, 7.0], [1, 12.0]], 0.95),
    }


def turned():
    """Reference as a function of the indication: the classical line the other way round. Invented data."""
    x = np.array([0.0, 25.0, 50.0, 75.0, 100.0, 125.0, 150.0, 175.0])
    y = np.array([0.3, 25.1, 50.4, 75.2, 100.6, 125.3, 150.7, 175.4])
    result = sm.OLS(x, np.array([[1, b] for b in y])).fit(method="qr")
    yield {
        "name": "reference from indication",
        "source": "invented",
        "visit": {
            "points": [{"reference": a, "indication": b} for a, b in zip(x.tolist(), y.tolist())],
            "model": {"orientation": "reference_from_indication", "terms": ["1", "y"]},
            "coverage": 0.95,
            "ask": {"at": [10.0, 90.0]},
        },
        "expect": coefficients(result, 0.95) + predictions(result, [[1, 10.0], [1, 90.0]], 0.95),
    }


def main():
    versions = {"numpy": np.__version__, "scipy": scipy.__version__, "statsmodels": statsmodels.__version__}
    fixture = {
        "what": "Classical least squares with Student-t intervals",
        "source": "statsmodels OLS and WLS (QR), SciPy for the chi-square and t distribution",
        "versions": {"python": platform.python_version()} | versions,
        "note": "Figures of double-precision libraries: compared to 1e-9.",
        "cases": [*body_fat(), *birds(), *weighted(), *turned()],
    }
    path = FIXTURES / "classical.json"
    path.write_text(json.dumps(fixture, ensure_ascii=False, indent=1) + "\n", encoding="utf-8")
    print(path.name, sum(len(case["expect"]) for case in fixture["cases"]), "expectations", versions)


if __name__ == "__main__":
    main()
