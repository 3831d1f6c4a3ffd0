"""Writes the fixtures from a folder of raw reference figures. Standard library only.

    python3 make_fixtures.py REFERENCE_FOLDER

The tests read only the fixtures. A case is a visit and a list of expectations, each a path in the report, the figure as
decimal text and how close it has to come:

    digits    at least min(13, limit − 0.2) correct digits, limit from exact_limits.py
    relative  |report − value| ≤ tolerance · magnitude, magnitude being the largest in the same list of figures
    absolute  |report − value| ≤ tolerance
    is        equal as JSON
"""

import json
import math
import pathlib
import shutil
import sys
from decimal import Decimal
from fractions import Fraction

import exact
import exact_limits

FIXTURES = pathlib.Path(__file__).resolve().parent.parent / "fixtures"
OWN = "exact rational arithmetic on the decimals as printed (tests/scripts/exact.py)"


def write(name, fixture):
    path = FIXTURES / name
    path.write_text(json.dumps(fixture, ensure_ascii=False, indent=1) + "\n", encoding="utf-8")
    print(path.name, sum(len(case["expect"]) for case in fixture["cases"]), "expectations")


def absolute(path, value, tolerance, source=None):
    entry = {"path": path, "kind": "absolute", "value": str(value), "tolerance": tolerance}
    return entry | ({"source": source} if source else {})


def relative(path, value, tolerance, magnitude=None, source=None):
    value = exact.text(value) if isinstance(value, (Fraction, int, Decimal)) else str(value)
    magnitude = value if magnitude is None else magnitude
    entry = {"path": path, "kind": "relative", "value": value, "tolerance": tolerance, "magnitude": str(magnitude)}
    return entry | ({"source": source} if source else {})


def equal(path, value):
    return {"path": path, "kind": "is", "value": value}


def points(references, indications, **columns):
    """Points from columns; a column's entry that is None is left out."""
    result = []
    for i, (x, y) in enumerate(zip(references, indications)):
        point = {"reference": x, "indication": y}
        point |= {name: column[i] for name, column in columns.items() if column[i] is not None}
        result.append(point)
    return result


def visit(points, terms, **rest):
    model = {"terms": terms} | rest.pop("model", {})
    return {"schema": "bandleaf.visit.1", "points": points, "model": model} | rest


# --- certified sets ---------------------------------------------------------------------------------------------------

STRD = "NIST Statistical Reference Datasets, linear regression, set {} (public domain); certified to 15 digits"


def polynomial(model):
    if model == "x":
        return ["x"]
    highest = {"1,x": 1, "1,x,x^2": 2}.get(model) or int(model.split("^")[1])
    return ["1", "x"][: highest + 1] + [f"x^{k}" for k in range(2, highest + 1)]


def certified_figure(path, value):
    if Decimal(value) == 0:
        return absolute(path, "0", 1e-9)
    return {"path": path, "kind": "digits", "value": value, "limit": None}


def certified(reference):
    (FIXTURES / "certified").mkdir(exist_ok=True)
    sets = json.loads((reference / "strd_certified.json").read_text())
    cases = []
    for name, entry in sets.items():
        shutil.copyfile(reference / f"{name}.csv", FIXTURES / "certified" / f"{name}.csv")
        expect = [certified_figure(f"fit.terms[{i}].estimate", b) for i, b in enumerate(entry["b"])]
        expect += [certified_figure(f"fit.terms[{i}].scale", sd) for i, sd in enumerate(entry["sd"])]
        expect += [certified_figure("fit.noise.estimate", entry["s"]), equal("fit.degrees_of_freedom", entry["df"])]
        cases.append(
            {
                "name": name,
                "source": STRD.format(name.capitalize()),
                "data": {"csv": f"certified/{name}.csv", "reference": "x", "indication": "y"},
                "visit": visit([], polynomial(entry["model"])),
                "expect": expect,
            }
        )
    write("certified.json", {"what": "Certified least-squares results", "cases": cases})
    exact_limits.main()


# --- published examples -----------------------------------------------------------------------------------------------


def published_expectations(example, paths):
    """The printed figures, each to half of its last digit (the tolerance noted with the example)."""
    return [
        absolute(path, example["published"][key], example["tolerance_used"][key], "as printed")
        for key, path in paths.items()
    ]


def line_figures(fit, tolerance=1e-10):
    """Coefficients, standard errors, s of a flat-prior fit, from exact arithmetic."""
    expect = []
    for i, (value, error) in enumerate(zip(fit.coefficients, fit.standard_errors())):
        expect.append(relative(f"fit.terms[{i}].estimate", value, tolerance, source=OWN))
        expect.append(relative(f"fit.terms[{i}].scale", error, tolerance, source=OWN))
        spread = error * exact.root(Fraction(fit.dof, fit.dof - 2))
        expect.append(relative(f"fit.terms[{i}].standard_uncertainty", spread, tolerance, source=OWN))
        for j in range(len(fit.coefficients)):
            entry = fit.variance * fit.inverse[i][j]
            largest = max(abs(fit.variance * e) for e in fit.inverse[i])
            expect.append(
                relative(f"fit.scale_matrix[{i}][{j}]", entry, tolerance, exact.text(largest), source=OWN)
            )
    expect.append(relative("fit.noise.estimate", fit.s(), tolerance, source=OWN))
    expect.append(relative("fit.residual_sum_of_squares", fit.rss, tolerance, source=OWN))
    expect.append(equal("fit.degrees_of_freedom", fit.dof))
    return expect


def curve_figures(fit, k, row, tolerance=1e-10):
    """Curve and new indication at `at[k]` of a flat-prior fit with σ unknown."""
    value, leverage = fit.at(row)
    return [
        relative(f"at[{k}].curve.estimate", value, tolerance, source=OWN),
        relative(f"at[{k}].curve.scale", exact.root(fit.variance * leverage), tolerance, source=OWN),
        relative(f"at[{k}].indication.scale", exact.root(fit.variance * (leverage + 1)), tolerance, source=OWN),
    ]


def provenance(example):
    """How the printed figures are known: seen in the source, or quoted from memory and confirmed by recomputation."""
    return "printed figures quoted from memory" if example["provenance"].startswith("recalled") else "printed figures seen"


def case(example, suffix, visit, expect, note=None):
    result = {
        "name": example["id"] + suffix,
        "source": f"{example['citation']} ({provenance(example)}; recomputed)",
        "visit": visit,
        "expect": expect,
    }
    return result | ({"note": note} if note else {})


def fractions(decimals):
    """The decimals as printed, exactly."""
    return [Fraction(str(d)) for d in decimals]


def gum_h3(example):
    data = example["data"]
    t, b = fractions(data["t_C"]), fractions(data["correction_C"])
    standard = [float(p + q) for p, q in zip(t, b)]
    rows = points(standard, data["t_C"])
    asked = {"at": [30]}
    as_published = exact.Fit([[1, a - 20] for a in t], b)
    printed = published_expectations(
        example,
        {
            "y1": "fit.terms[0].estimate",
            "u_y1": "fit.terms[0].scale",
            "y2": "fit.terms[1].estimate",
            "u_y2": "fit.terms[1].scale",
            "s": "fit.noise.estimate",
            "b_30": "at[0].curve.estimate",
            "u_b_30": "at[0].curve.scale",
        },
    )
    turned = exact.Fit([[1, p + q - 20] for p, q in zip(t, b)], t)
    unit = {"instrument": {"quantity": "temperature", "unit": "°C"}}
    correction = {"orientation": "correction_from_indication"}
    return [
        case(
            example,
            "_as_published",
            visit(rows, ["1", "y-20"], model=correction, ask=asked, **unit),
            printed + line_figures(as_published) + curve_figures(as_published, 0, [1, 10]),
            "correction = reference − indication as a line in the indication, about 20 °C",
        ),
        case(
            example,
            "_indication_from_reference",
            visit(rows, ["1", "x-20"], ask=asked, **unit),
            line_figures(turned) + curve_figures(turned, 0, [1, 10]),
            "the same observations as indication = a + b·(reference − 20); not printed in the guide",
        ),
    ]


def iso28037(example, suffix, noise_sd, repeats):
    """Known noise both ways: uncertainties per point, and one σ with numbers of repeats that give the same variances."""
    data = example["data"]
    x, y, u = (fractions(data[key]) for key in ("x", "y", "u_y"))
    fit = exact.Fit([[1, a] for a in x], y, [1 / e**2 for e in u])
    paths = {
        "a": "fit.terms[0].estimate",
        "b": "fit.terms[1].estimate",
        "u_a": "fit.terms[0].standard_uncertainty",
        "u_b": "fit.terms[1].standard_uncertainty",
        "cov_ab": "fit.covariance[0][1]",
    }
    own = [relative(f"fit.terms[{i}].estimate", c, 1e-12, source=OWN) for i, c in enumerate(fit.coefficients)]
    own += [
        relative(f"fit.covariance[{i}][{j}]", fit.inverse[i][j], 1e-12, source=OWN) for i in range(2) for j in range(2)
    ]
    counted = exact.Fit([[1, a] for a in x], y, repeats)
    value, scale = exact.line_inverse(counted, Fraction("10.5"), 1, Fraction(noise_sd) ** 2)
    reading = published_expectations(
        example, {"x_at_reading": "readings[0].linearised.estimate", "u_x": "readings[0].linearised.scale"}
    ) + [
        relative("readings[0].linearised.estimate", value, 1e-10, source=OWN),
        relative("readings[0].linearised.scale", scale, 1e-10, source=OWN),
        equal("fit.degrees_of_freedom", None),
    ]
    printed = published_expectations(example, paths)
    chi = published_expectations(example, {"chi2": "fit.residual_sum_of_squares"})
    per_point = visit(
        points(data["x"], data["y"], indication_uncertainty=data["u_y"]),
        ["1", "x"],
        model={"noise": {"kind": "known", "standard_deviation": 0}},
    )
    common = visit(
        points(data["x"], data["y"], repeats=repeats),
        ["1", "x"],
        model={"noise": {"kind": "known", "standard_deviation": float(noise_sd)}},
        ask={"readings": [[10.5]]},
    )
    return [
        case(example, "_per_point", per_point, printed + chi + own, "each point's own known uncertainty"),
        case(example, "_one_sigma", common, printed + own + reading, "one known σ; means of m points count m times"),
    ]


def eurachem(example):
    data = example["data"]
    x, y = fractions(data["conc_mg_per_l"]), fractions(data["absorbance"])
    fit = exact.Fit([[1, a] for a in x], y)
    mean, _ = fit.at([1, Fraction(str(data["c0"]))])
    value, scale = exact.line_inverse(fit, mean, 2, fit.variance)
    printed = published_expectations(
        example, {"B0": "fit.terms[0].estimate", "B1": "fit.terms[1].estimate", "s": "fit.noise.estimate"}
    )
    printed += published_expectations(example, {"u_c0": "readings[0].linearised.scale"})
    own = [
        relative("readings[0].linearised.estimate", value, 1e-10, source=OWN),
        relative("readings[0].linearised.scale", scale, 1e-10, source=OWN),
        equal("readings[0].linearised.degrees_of_freedom", 13),
    ]
    return [
        case(
            example,
            "",
            visit(
                points(data["conc_mg_per_l"], data["absorbance"]),
                ["1", "x"],
                ask={"readings": [[float(mean), float(mean)]]},
            ),
            printed + line_figures(fit) + own,
            "the two readings of the unknown are put so that their mean is the curve at 0.26",
        )
    ]


def load_cell(example):
    rows = [line.split(",") for line in (FIXTURES / "certified/pontius.csv").read_text().splitlines()[1:]]
    x, y = fractions([a for a, _ in rows]), fractions([b for _, b in rows])
    fit = exact.Fit([[1, a, a * a] for a in x], y)
    c0, c1, c2 = fit.coefficients
    discriminant = exact.root(c1 * c1 - 4 * c2 * (c0 - Fraction("1.239722")))
    load = Fraction((-exact.dec(c1) + discriminant) / (2 * exact.dec(c2)))
    _, leverage = fit.at([1, load, load * load])
    slope = c1 + 2 * c2 * load
    scale = exact.root(fit.variance * (1 + leverage) / slope**2)
    expect = published_expectations(example, {"load_estimate": "readings[0].linearised.estimate"})
    expect += [
        relative("readings[0].linearised.estimate", load, 1e-10, source=OWN),
        relative("readings[0].linearised.scale", scale, 1e-9, source=OWN),
        relative("readings[0].linearised.slope", slope, 1e-10, source=OWN),
        equal("readings[0].solutions.length", 1),
    ]
    own = "inverse of the 95 % prediction limits, computed with the collection; the posterior interval is not the same thing"
    expect += [
        absolute("readings[0].value.interval[0]", example["recomputed"]["lower95"], 0.5, own),
        absolute("readings[0].value.interval[1]", example["recomputed"]["upper95"], 0.5, own),
    ]
    body = visit([], ["1", "x", "x^2"], ask={"readings": [[1.239722]]}) | {
        "instrument": {"quantity": "load", "range": [0, 3000000]}
    }
    result = case(example, "", body, expect, "the second root, near 2.3e8, lies far outside the range and is no value")
    return [result | {"data": {"csv": "certified/pontius.csv", "reference": "x", "indication": "y"}}]


def fluorescein(example):
    data = example["data"]
    x, y = fractions(data["conc_pg_per_ml"]), fractions(data["intensity"])
    fit = exact.Fit([[1, a] for a in x], y)
    printed = published_expectations(
        example,
        {
            "slope": "fit.terms[1].estimate",
            "intercept": "fit.terms[0].estimate",
            "s_yx": "fit.noise.estimate",
            "s_slope": "fit.terms[1].scale",
            "s_intercept": "fit.terms[0].scale",
        },
    )
    for i, key in enumerate(("ci_intercept", "ci_slope")):
        half, middle = Decimal(str(example["recomputed"][key])), exact.dec(fit.coefficients[i])
        for end, sign in ((0, -1), (1, 1)):
            value = middle + sign * half
            expected = absolute(f"fit.terms[{i}].interval[{end}]", exact.text(value, 10), 2e-9, "recomputed, ten digits")
            printed.append(expected)
    readings = [("2.9", 1), ("13.5", 1), ("23.0", 1), ("13.5", 4)]
    for k, (indication, repeats) in enumerate(readings):
        key = indication if repeats == 1 else f"{indication}x{repeats}"
        value, scale = exact.line_inverse(fit, Fraction(indication), repeats, fit.variance)
        at = f"readings[{k}].linearised"
        printed += published_expectations(example, {f"x_at_{key}": f"{at}.estimate", f"s_x_at_{key}": f"{at}.scale"})
        printed += [
            relative(f"{at}.estimate", value, 1e-10, source=OWN),
            relative(f"{at}.scale", scale, 1e-10, source=OWN),
        ]
        printed.append(
            absolute(f"readings[{k}].value.expanded_uncertainty", example["published"][f"ci_x_at_{key}"], 0.01, "as printed")
        )
    asked = [[float(indication)] * repeats for indication, repeats in readings]
    body = visit(points(data["conc_pg_per_ml"], data["intensity"]), ["1", "x"], ask={"readings": asked})
    return [case(example, "", body, printed + line_figures(fit))]


def tap_water(example):
    prior, summary = example["data"]["prior"], example["data"]["summary"]
    half = summary["sd"] * math.sqrt(27 / 28)
    indications = [summary["mean"] + half, summary["mean"] - half] * 14
    body = visit(
        points([1] * 28, indications),
        ["1"],
        model={
            "noise": {
                "kind": "stated",
                "standard_deviation": math.sqrt(prior["s0_squared"]),
                "degrees_of_freedom": prior["nu0"],
            },
            "known_before": [
                {"kind": "conjugate", "mean": [prior["m0"]], "covariance_over_variance": [[1 / prior["n0"]]]}
            ],
        },
        ask={"at": [1]},
    )
    exact_figures, shown = example["recomputed"], example["published"]
    expect = published_expectations(
        example, {"posterior_mean": "fit.terms[0].estimate", "posterior_scale": "fit.terms[0].scale"}
    )
    expect += [absolute(f"fit.terms[0].interval[{i}]", shown["ci95"][i], 2e-5, "as printed") for i in (0, 1)]
    precision = shown["precision_ci95"]
    for end, other in ((0, 1), (1, 0)):
        sigma = (1 / Decimal(str(precision[other]))).sqrt()
        tolerance = float(sigma) * 2e-9 / precision[other]
        expect.append(absolute(f"fit.noise.interval[{end}]", exact.text(sigma, 9), tolerance, "as printed, as σ = τ^(−1/2)"))
    ten = "recomputed, ten digits"
    expect += [
        equal("fit.degrees_of_freedom", 52),
        relative("fit.terms[0].estimate", exact_figures["posterior_mean"], 1e-9, source=ten),
        relative("fit.terms[0].scale", exact_figures["posterior_scale"], 1e-9, source=ten),
        relative("fit.terms[0].standard_uncertainty", exact_figures["posterior_sd"], 1e-9, source=ten),
        relative("fit.noise.estimate", math.sqrt(exact_figures["s2_n"]), 1e-9, source=ten),
        relative("at[0].indication.interval[0]", exact_figures["predictive95"][0], 1e-9, "10", source=ten),
        relative("at[0].indication.interval[1]", exact_figures["predictive95"][1], 1e-9, source=ten),
    ]
    note = "28 invented indications with exactly the printed mean and standard deviation; any such data have this posterior"
    return [case(example, "", body, expect, note)]


def oxygen_uptake(example):
    data = example["data"]
    age, group, y = (fractions(data[key]) for key in ("age", "group", "y"))
    rows = [[1, g, a, g * a] for a, g in zip(age, group)]
    fit = exact.Fit(rows, y)
    terms = ["1", "group", "x", "x*group"]
    given = points(data["age"], data["y"], influences=[{"group": g} for g in data["group"]])
    instrument = {"instrument": {"influences": {"group": {"unit": ""}}}}
    published = example["published"]
    flat = [absolute(f"fit.terms[{i}].estimate", v, 5e-7, "as printed") for i, v in enumerate(published["ols"])]
    flat += [absolute(f"fit.terms[{i}].scale", v, 5e-7, "as printed") for i, v in enumerate(published["ols_se"])]
    spread = [[float(12 * entry) for entry in row] for row in fit.inverse]
    conjugate = {
        "noise": {"kind": "stated", "standard_deviation": math.sqrt(8.54), "degrees_of_freedom": 1},
        "known_before": [{"kind": "conjugate", "mean": [0, 0, 0, 0], "covariance_over_variance": spread}],
    }
    ten = "recomputed, ten digits"
    figures = example["recomputed"]
    informed = [
        absolute(f"fit.terms[{i}].estimate", v, 0.005, "as printed")
        for i, v in enumerate(published["posterior_mean_first_two"])
    ]
    for key, field in (
        ("posterior_mean", "estimate"),
        ("posterior_t_scale", "scale"),
        ("posterior_sd", "standard_uncertainty"),
    ):
        informed += [
            relative(f"fit.terms[{i}].{field}", v, 1e-9, source=ten) for i, v in enumerate(figures[key])
        ]
    informed.append(equal("fit.degrees_of_freedom", 13))
    return [
        case(example, "_flat", visit(given, terms, **instrument), flat + line_figures(fit, 1e-10)),
        case(example, "_conjugate", visit(given, terms, model=conjugate, **instrument), informed),
    ]


def published(reference):
    examples = {e["id"]: e for e in json.loads((reference / "published.json").read_text())["examples"]}
    cases = gum_h3(examples["gum_h3"])
    cases += iso28037(examples["iso28037_equal"], "", "0.5", [1] * 6)
    cases += iso28037(examples["iso28037_unequal"], "", "1", [4, 4, 4, 1, 1, 1])
    cases += eurachem(examples["eurachem_a5"])
    cases += load_cell(examples["nist_loadcell_inverse"])
    cases += fluorescein(examples["miller_fluorescein"])
    cases += tap_water(examples["tthm_normal_gamma"])
    cases += oxygen_uptake(examples["hoff_gprior"])
    write("published.json", {"what": "Worked examples with printed results", "cases": cases})


# --- independent multi-precision figures ------------------------------------------------------------------------------

ORACLE = "computed independently with mpmath at 60 and 90 digits from the model's definition; invented data"


class Oracle:
    """One case of the multi-precision figures as expectations on a report."""

    def __init__(self, raw):
        self.raw = raw
        self.outputs = raw["outputs"]
        self.limits = raw["change_when_inputs_are_f64"]
        self.expect = []

    def tolerance(self, key):
        return max(1e-10, 20 * float(self.limits[key]))

    def one(self, path, key, value, magnitude=None):
        if value is None:
            self.expect.append(equal(path, None))
        elif isinstance(value, bool):
            self.expect.append(equal(path, value))
        else:
            magnitude = abs(float(value)) if magnitude is None else magnitude
            entry = relative(path, value, self.tolerance(key), magnitude or 1.0)
            self.expect.append(entry)

    def many(self, paths, key, values):
        """A list: relative to the largest magnitude in it."""
        largest = max((abs(float(v)) for v in values if v is not None), default=0.0)
        for path, value in zip(paths, values):
            self.one(path, key, value, largest or 1.0)

    def fit(self):
        for key, field in (("coef", "estimate"), ("coef_sd", "standard_uncertainty"), ("coef_scale", "scale")):
            if key in self.outputs:
                values = self.outputs[key]
                self.many([f"fit.terms[{i}].{field}" for i in range(len(values))], key, values)
        for key, field in (("coef_cov", "covariance"), ("coef_scale_matrix", "scale_matrix")):
            for i, row in enumerate(self.outputs.get(key, [])):
                self.many([f"fit.{field}[{i}][{j}]" for j in range(len(row))], key, row)
        for i, ends in enumerate(self.outputs.get("coef_95", [])):
            self.many([f"fit.terms[{i}].interval[{j}]" for j in (0, 1)], "coef_95", ends)

    def rows(self):
        for key, field in (
            ("residuals", "residual"),
            ("leverage", "leverage"),
            ("cooks_distance", "cook_distance"),
            ("loo_log_density", "left_out_log_density"),
            ("loo_pit", "left_out_tail"),
        ):
            if key in self.outputs:
                values = self.outputs[key]
                self.many([f"points[{i}].{field}" for i in range(len(values))], key, values)
        for key, path in (
            ("loo_total", "fit.left_out_log_density"),
            ("log_evidence", "fit.log_evidence"),
            ("evidence_is_proper", "fit.evidence_is_proper"),
            ("effective_parameters", "fit.effective_parameters"),
            ("rss", "fit.residual_sum_of_squares"),
            ("s", "fit.noise.estimate"),
            ("dof", "fit.degrees_of_freedom"),
            ("nu_post", "fit.degrees_of_freedom"),
        ):
            if key in self.outputs:
                self.one(path, key, self.outputs[key])
        if "s_sq_post" in self.outputs:
            s = Decimal(self.outputs["s_sq_post"]).sqrt()
            self.one("fit.noise.estimate", "s_sq_post", exact.text(s, 15))
        if "sigma_95" in self.outputs:
            self.many(["fit.noise.interval[0]", "fit.noise.interval[1]"], "sigma_95", self.outputs["sigma_95"])

    def places(self, first, level):
        """Predictions; at 0.95 everything, at another coverage only the intervals."""
        for k, entry in enumerate(self.outputs.get("predict", []), first):
            for name, part in (("curve", "curve"), ("new", "indication")):
                if level == "95":
                    self.one(f"at[{k}].{part}.estimate", "predict", entry["mean"])
                    self.one(f"at[{k}].{part}.standard_uncertainty", "predict", entry[f"{name}_sd"])
                    self.one(f"at[{k}].{part}.scale", "predict", entry[f"{name}_scale"])
                self.many([f"at[{k}].{part}.interval[{j}]" for j in (0, 1)], "predict", entry[f"{name}_{level}"])
        for k, entry in enumerate(self.outputs.get("curve", []), first):
            if level == "95":
                self.one(f"at[{k}].curve.estimate", "curve", entry["mean"])
                self.one(f"at[{k}].curve.standard_uncertainty", "curve", entry["sd"])
            self.many([f"at[{k}].curve.interval[{j}]" for j in (0, 1)], "curve", entry[level])

    def lack_of_fit(self):
        found = self.outputs.get("lack_of_fit")
        if found:
            self.one("checks[check=lack_of_fit].statistic", "lack_of_fit", found["F"])
            self.one("checks[check=lack_of_fit].p", "lack_of_fit", found["p_value"])

    def value(self):
        """The posterior of a value: places to 1e-6 of its standard uncertainty, closed forms as elsewhere."""
        out, at = self.outputs, "readings[0].value"
        near = 1e-6 * float(out["sd"])
        self.expect += [
            absolute(f"{at}.median", out["median"], near),
            absolute(f"{at}.mean", out["mean"], near),
            absolute(f"{at}.standard_uncertainty", out["sd"], near),
            equal(f"{at}.modes.length", len(out["modes_inside"])),
        ]
        for key, field in (("equal_tailed", "interval"), ("shortest", "shortest_interval")):
            self.expect += [absolute(f"{at}.{field}[{j}]", out[key][j], near) for j in (0, 1)]
        self.expect += [absolute(f"{at}.modes[{j}]", mode, near) for j, mode in enumerate(out["modes_inside"])]
        ends = out["relative_density_at_ends"]
        self.expect += [absolute(f"{at}.relative_density_at_ends[{j}]", ends[j], 1e-9) for j in (0, 1)]
        predictive = out["log_predictive_mean_over_range"]
        self.expect.append(relative(f"{at}.log_predictive_mean", predictive, 1e-9))
        ends = [Decimal(str(end)) for end in self.raw["inputs"]["range"]]
        for entry in out["density_at"]:
            if Decimal(entry["x"]) in ends:
                continue
            self.expect.append(
                {"path": f"{at}.density", "kind": "density", "x": entry["x"], "value": entry["density"], "tolerance": 1e-3}
            )
        self.expect.append(equal("readings[0].solutions.length", len(out["linearised"])))
        for k, solution in enumerate(out["linearised"]):
            path = f"readings[0].solutions[{k}]"
            self.expect.append(absolute(f"{path}.estimate", solution["x"], 1e-6 * float(solution["u_scale"])))
            for key, field in (("slope", "slope"), ("u_scale", "scale"), ("u_sd", "standard_uncertainty")):
                self.one(f"{path}.{field}", "linearised", solution[key])

    def case(self, name, visit):
        return {"name": name, "source": ORACLE, "note": self.raw["what"], "visit": visit, "expect": self.expect}


def oracle_visit(inputs, coverage, places):
    columns = {}
    if "v" in inputs:
        columns["repeats"] = [1 / v for v in inputs["v"]]
    if "u_y" in inputs:
        columns["indication_uncertainty"] = inputs["u_y"]
    noise = {"kind": "unknown"}
    known = [{"kind": "flat"}]
    sigma, prior = inputs.get("sigma", {}), inputs["prior"]
    if "u_y" in inputs:
        noise = {"kind": "known", "standard_deviation": 0}
    if "noise_precision" in inputs:
        noise = {"kind": "known", "standard_deviation": 1 / math.sqrt(inputs["noise_precision"])}
    if sigma.get("kind") == "scaled-inv-chi2":
        noise = {
            "kind": "stated",
            "standard_deviation": math.sqrt(sigma["s0_sq"]),
            "degrees_of_freedom": sigma["nu0"],
        }
    if prior["kind"] == "nig":
        known = [{"kind": "conjugate", "mean": prior["m0"], "covariance_over_variance": prior["V0"]}]
    if prior["kind"] == "shrinkage":
        basis = {"as given": "as_given", "standardised": "standardised"}[prior["basis"]]
        known = [{"kind": "shrinkage", "precision": prior["b"], "basis": basis, "intercept": prior["intercept"]}]
    return visit(
        points(inputs["x"], inputs["y"], **columns),
        inputs["terms"],
        model={"noise": noise, "known_before": known},
        coverage=coverage,
        ask={"at": places},
    )


def oracle_cases(raw):
    """Everything at 95 %, and the intervals once more at 99 %."""
    inputs = raw["inputs"]
    if "indication" in inputs:
        body = oracle_visit(inputs, inputs["level"], [])
        body["instrument"] = {"range": inputs["range"], "hard_limits": inputs["range"]}
        body["ask"] = {
            "readings": [{"indications": [inputs["indication"]] * inputs["m"], "resolution": inputs.get("r")}]
        }
        expected = Oracle(raw)
        expected.value()
        return [expected.case(raw["name"], body)]
    cases = []
    for level in ("95", "99"):
        expected = Oracle(raw)
        if level == "95":
            expected.fit()
            expected.rows()
            expected.lack_of_fit()
            fitted = raw["outputs"].get("fitted", [])
            places = [f"at[{k}].curve.estimate" for k in range(len(inputs["x_new"]), len(inputs["x_new"]) + len(fitted))]
            expected.many(places, "fitted", fitted)
        expected.places(0, level)
        body = oracle_visit(inputs, int(level) / 100, inputs["x_new"] + inputs["x"])
        cases.append(expected.case(f"{raw['name']} at {level} %", body))
    return cases


def oracle(reference):
    cases = []
    for letter in "ABCF":
        for raw in json.loads((reference / "oracle" / f"{letter}.json").read_text())["cases"]:
            cases += oracle_cases(raw)
    note = (
        "Figures relative to the largest magnitude in the same list, to max(1e-10, 20 × the change of the exact result "
        "when its inputs are rounded to f64). Places on the value axis to 1e-6 of the value's standard uncertainty. "
        "A density between two places of the report is interpolated, hence its wider bound; the report draws no density "
        "at the very ends of the extent, so there only its ratio to the greatest density is compared, to 1e-9."
    )
    write("oracle.json", {"what": "The model's definitions evaluated in multiple precision", "note": note, "cases": cases})


def plain_data(reference):
    (FIXTURES / "data").mkdir(exist_ok=True)
    for name in ("bodyfat", "birdextinct"):
        shutil.copyfile(reference / f"{name}.csv", FIXTURES / "data" / f"{name}.csv")


def main():
    reference = pathlib.Path(sys.argv[1])
    certified(reference)
    published(reference)
    oracle(reference)
    plain_data(reference)


if __name__ == "__main__":
    main()
