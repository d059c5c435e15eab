"""Answers of numpy, scipy, mpmath and uncertainties to the questions of the oracle tests: JSON in, JSON out."""

import json
import math
import sys
import warnings

import mpmath
import numpy as np
import scipy.odr
import scipy.optimize
import scipy.stats
from uncertainties import ufloat, umath

warnings.simplefilter("ignore")

NAMES = {
    "ln": umath.log,
    "log10": umath.log10,
    "exp": umath.exp,
    "sqrt": umath.sqrt,
    "abs": abs,
    "sin": umath.sin,
    "cos": umath.cos,
    "tan": umath.tan,
    "asin": umath.asin,
    "acos": umath.acos,
    "atan": umath.atan,
    "min": min,
    "max": max,
}


def told(result):
    """Value and standard uncertainty, or nothing where there is no finite real one."""
    if isinstance(result, complex):
        return None
    value = getattr(result, "nominal_value", result)
    deviation = getattr(result, "std_dev", 0.0)
    if isinstance(value, complex) or not (math.isfinite(value) and math.isfinite(deviation)):
        return None
    return [float(value), float(deviation)]


PLAIN = {**{name: getattr(math, name) for name in NAMES if hasattr(math, name)}, "ln": math.log, "abs": abs, "min": min, "max": max}
FAILURES = (ValueError, ZeroDivisionError, OverflowError, TypeError, ArithmeticError)


def evaluate(code, inputs):
    """[value, deviation]; [value, None] where the value is there and a derivative is not; None without value."""
    uncertain = {name: ufloat(value, deviation) for name, value, deviation in inputs}
    try:
        answer = told(eval(code, {"__builtins__": {}}, {**NAMES, **uncertain}))
        if answer is not None:
            return answer
    except FAILURES:
        pass
    try:
        plain = eval(code, {"__builtins__": {}}, {**PLAIN, **{name: value for name, value, _ in inputs}})
    except FAILURES:
        return None
    return None if isinstance(plain, complex) or not math.isfinite(plain) else [float(plain), None]


LONG = {**{name: getattr(np, name) for name in NAMES if hasattr(np, name)}, "ln": np.log, "abs": abs, "min": min, "max": max}
LONG |= {"asin": np.arcsin, "acos": np.arccos, "atan": np.arctan}


def rounding(code, inputs, value):
    """How far the value moves, relative to itself, when the same formula is worked out with longer numbers."""
    longer = {name: np.longdouble(repr(each)) for name, each, _ in inputs}
    try:
        apart = float(abs(eval(code, {"__builtins__": {}}, {**LONG, **longer}) - value) / abs(value))
        return apart if math.isfinite(apart) else None
    except FAILURES:
        return None


def formula(question):
    """The formula as it stands, again with its inputs moved a little, and with longer numbers: what that changes tells its condition."""
    code = compile(question["text"].replace("^", "**"), "formula", "eval")
    inputs = question["inputs"]
    answers = [
        evaluate(code, [(name, value * (1 + move * (1 + i)), u) for i, (name, value, u) in enumerate(inputs)])
        for move in [0.0, *question["moves"]]
    ]
    here = answers[0]
    return {"answers": answers, "rounding": rounding(code, inputs, here[0]) if here and here[0] else 0.0}


def line(question):
    """scipy.stats.linregress."""
    fit = scipy.stats.linregress(question["x"], question["y"])
    return [fit.slope, fit.intercept, fit.stderr, fit.intercept_stderr]


def uncertain_line(question):
    """The same line as a formula over readings with their own and with shared deviations, carried by uncertainties."""
    shared_x = ufloat(0, question["shared_x"])
    shared_y = ufloat(0, question["shared_y"])
    x = [ufloat(v, question["ux"]) + shared_x for v in question["x"]]
    y = [ufloat(v, question["uy"]) + v * shared_y for v in question["y"]]
    n = len(x)
    mean_x, mean_y = sum(x) / n, sum(y) / n
    slope = sum((a - mean_x) * (b - mean_y) for a, b in zip(x, y)) / sum((a - mean_x) ** 2 for a in x)
    intercept = mean_y - slope * mean_x
    ratio = intercept / slope
    return [told(slope), told(intercept), told(ratio)]


def linear(question):
    """Weighted linear least squares by numpy's singular value decomposition; standard errors as they are and scaled."""
    columns = np.array(question["columns"]).T
    y, u = np.array(question["y"]), np.array(question["u"])
    weighted = columns / u[:, None]
    solution, _, _, _ = np.linalg.lstsq(weighted, y / u, rcond=None)
    inverse = np.linalg.pinv(weighted)
    covariance = inverse @ inverse.T
    residuals = (y - columns @ solution) / u
    chi_squared = float(residuals @ residuals)
    scale = math.sqrt(chi_squared / (len(y) - columns.shape[1]))
    errors = np.sqrt(np.diag(covariance))
    return {
        "parameters": solution.tolist(),
        "stated": errors.tolist(),
        "scatter": (errors * scale).tolist(),
        "chiSquared": chi_squared,
    }


def polynomial(question):
    """numpy's polynomial in Chebyshev form, told in powers of x."""
    x, y = np.array(question["x"]), np.array(question["y"])
    fit = np.polynomial.Chebyshev.fit(x, y, question["degree"])
    return fit.convert(kind=np.polynomial.Polynomial, domain=[-1, 1]).coef.tolist()


MODELS = {
    "decay": lambda x, a, b, c: a + b * np.exp(-c * x),
    "saturation": lambda x, a, b: a * x / (b + x),
    "wave": lambda x, a, b, c: a * np.sin(b * x + c),
    "power": lambda x, a, b: a * x**b,
}


def nonlinear(question):
    """scipy.optimize.curve_fit to its last digit."""
    found, covariance = scipy.optimize.curve_fit(
        MODELS[question["model"]],
        np.array(question["x"]),
        np.array(question["y"]),
        p0=question["start"],
        sigma=np.array(question["u"]),
        absolute_sigma=question["policy"] == "stated",
        ftol=1e-15,
        xtol=1e-15,
        gtol=1e-15,
        maxfev=100000,
    )
    return [found.tolist(), np.sqrt(np.diag(covariance)).tolist()]


def both_axes(question):
    """Orthogonal distance regression of scipy: the line itself."""
    data = scipy.odr.RealData(question["x"], question["y"], sx=question["ux"], sy=question["uy"])
    model = scipy.odr.Model(lambda b, x: b[0] * x + b[1])
    run = scipy.odr.ODR(data, model, beta0=question["start"], sstol=1e-16, partol=1e-16, maxit=1000)
    run.set_job(fit_type=0, deriv=1)
    return run.run().beta.tolist()


def student(question):
    """How far, relative to itself, a coverage factor lies from the true one: by 40 digits of mpmath, since scipy has nine."""
    mpmath.mp.dps = 40
    apart = []
    for p, nu, k in ([mpmath.mpf(each) for each in triple] for triple in question["triples"]):
        within = mpmath.betainc(mpmath.mpf(1) / 2, nu / 2, 0, k * k / (nu + k * k), regularized=True)
        norm = mpmath.gamma((nu + 1) / 2) / (mpmath.sqrt(nu * mpmath.pi) * mpmath.gamma(nu / 2))
        density = norm * (1 + k * k / nu) ** (-(nu + 1) / 2)
        apart.append(float((within - p) / (2 * density * k)))
    return apart


KINDS = {
    "formula": formula,
    "line": line,
    "uncertain-line": uncertain_line,
    "linear": linear,
    "polynomial": polynomial,
    "nonlinear": nonlinear,
    "both-axes": both_axes,
    "student": student,
}

json.dump([KINDS[each["kind"]](each) for each in json.load(sys.stdin)], sys.stdout)
