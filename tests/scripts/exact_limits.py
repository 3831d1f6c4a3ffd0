"""How many certified digits exact arithmetic on the same data gives, once the data are rounded to f64.

    python3 exact_limits.py            prints the table and freezes the limits in ../fixtures/certified.json

A program that reads f64 cannot be asked for more digits than an exact solution of the rounded data has. The limit of a
figure is −log10 of the relative difference between the exact solution for the rounded data and the certified value; a
certified value has 15 digits, so agreement to all of them is written as 15.
"""

import json
import pathlib
from decimal import Decimal
from fractions import Fraction

import exact

FIXTURES = pathlib.Path(__file__).resolve().parent.parent / "fixtures"
MOST_DIGITS = Decimal(15)


def digits(value, certified):
    """Correct digits of a value against a certified one."""
    certified = Decimal(certified)
    error = abs(exact.dec(value) - certified) if isinstance(value, Fraction) else abs(value - certified)
    if error == 0:
        return MOST_DIGITS
    return min(MOST_DIGITS, -(error / abs(certified)).log10())


def read(case):
    """Abscissae and responses of a case as the exact values of their nearest doubles."""
    lines = (FIXTURES / case["data"]["csv"]).read_text(encoding="utf-8").splitlines()[1:]
    pairs = [tuple(map(float, line.split(","))) for line in lines]
    return [Fraction(x) for x, _ in pairs], [Fraction(y) for _, y in pairs]


def power(term):
    """Exponent of a polynomial term."""
    return {"1": 0, "x": 1}.get(term) if "^" not in term else int(term.split("^")[1])


def solve(case):
    """Exact figures of a case by path in the report."""
    x, y = read(case)
    powers = [power(term) for term in case["visit"]["model"]["terms"]]
    fit = exact.Fit([[a**k for k in powers] for a in x], y)
    figures = {"fit.noise.estimate": fit.s()}
    for i, (value, error) in enumerate(zip(fit.coefficients, fit.standard_errors())):
        figures[f"fit.terms[{i}].estimate"] = value
        figures[f"fit.terms[{i}].scale"] = error
    return figures


def main():
    path = FIXTURES / "certified.json"
    fixture = json.loads(path.read_text(encoding="utf-8"))
    for case in fixture["cases"]:
        figures = solve(case)
        for expectation in case["expect"]:
            if expectation.get("kind") != "digits":
                continue
            limit = digits(figures[expectation["path"]], expectation["value"])
            expectation["limit"] = float(round(limit, 2))
            print(f"{case['name']:10} {expectation['path']:24} {expectation['limit']:6.2f}")
    path.write_text(json.dumps(fixture, ensure_ascii=False, indent=1) + "\n", encoding="utf-8")


if __name__ == "__main__":
    main()
