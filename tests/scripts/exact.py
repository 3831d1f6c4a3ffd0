"""Least squares in exact rational arithmetic, standard library only.

Everything is a `Fraction` until a square root is needed, which is taken to 60 digits. Slow, plain, and a second route to
every closed-form figure in the fixtures: normal equations are harmless where nothing is rounded.
"""

from decimal import Decimal, getcontext
from fractions import Fraction

getcontext().prec = 60


def dec(value):
    """A rational (or anything a rational can be made of) as a decimal of 60 digits."""
    value = Fraction(value)
    return Decimal(value.numerator) / Decimal(value.denominator)


def root(value):
    """Square root of a rational, 60 digits."""
    return dec(value).sqrt()


def text(value, digits=17):
    """Decimal text with so many significant digits."""
    value = dec(value) if isinstance(value, (Fraction, int)) else Decimal(value)
    return format(value, f".{digits - 1}e") if value else "0"


def inverse(matrix):
    """Inverse of a square matrix of fractions (Gauss–Jordan; any non-zero pivot will do)."""
    size = len(matrix)
    work = [list(map(Fraction, row)) + [Fraction(int(i == j)) for j in range(size)] for i, row in enumerate(matrix)]
    for column in range(size):
        pivot = next(i for i in range(column, size) if work[i][column] != 0)
        work[column], work[pivot] = work[pivot], work[column]
        head = work[column][column]
        work[column] = [entry / head for entry in work[column]]
        for i in range(size):
            if i != column and work[i][column] != 0:
                factor = work[i][column]
                work[i] = [a - factor * b for a, b in zip(work[i], work[column])]
    return [row[size:] for row in work]


def form(left, matrix, right=None):
    """leftᵀ · matrix · right."""
    right = left if right is None else right
    return sum(a * sum(m * b for m, b in zip(row, right)) for a, row in zip(left, matrix))


class Fit:
    """Weighted least squares: rows of basis values, responses, weights 1/v."""

    def __init__(self, rows, response, weights=None):
        rows = [list(map(Fraction, row)) for row in rows]
        response = list(map(Fraction, response))
        weights = [Fraction(1)] * len(rows) if weights is None else list(map(Fraction, weights))
        size = len(rows[0])
        normal = [
            [sum(w * row[i] * row[j] for w, row in zip(weights, rows)) for j in range(size)] for i in range(size)
        ]
        right = [sum(w * row[i] * y for w, row, y in zip(weights, rows, response)) for i in range(size)]
        self.inverse = inverse(normal)
        self.coefficients = [sum(a * b for a, b in zip(line, right)) for line in self.inverse]
        self.residuals = [y - sum(c * a for c, a in zip(self.coefficients, row)) for row, y in zip(rows, response)]
        self.rss = sum(w * e * e for w, e in zip(weights, self.residuals))
        self.dof = len(rows) - size
        self.variance = self.rss / self.dof if self.dof > 0 else None

    def s(self):
        """Residual standard deviation."""
        return root(self.variance)

    def standard_errors(self):
        """Classical standard errors of the coefficients."""
        return [root(self.variance * self.inverse[i][i]) for i in range(len(self.coefficients))]

    def at(self, row):
        """Curve at a row of basis values, and the variance of it over σ²."""
        row = list(map(Fraction, row))
        return sum(c * a for c, a in zip(self.coefficients, row)), form(row, self.inverse)


def line_inverse(fit, mean_indication, repeats, noise_variance):
    """Value of a reading on a line, and its first-order standard uncertainty (law of propagation of uncertainty)."""
    intercept, slope = fit.coefficients
    value = (Fraction(mean_indication) - intercept) / slope
    leverage = fit.at([1, value])[1]
    return value, root(noise_variance * (leverage + Fraction(1, repeats)) / slope**2)
