"""Reference values of small published tables, by a route that shares nothing with the
project: NumPy and SciPy in double precision. Writes small_tables.json beside itself:

    python3 testdata/reference/computed/small_tables.py

Reads only the tables in the folders beside its own; their sources are in ../PROVENANCE.md.
Another build of LAPACK, or another number of its threads, changes the last digits. Against the
same quantities in 60-digit arithmetic the stored file is right to 14 digits or more, but for
the coefficients of longley (12.8 digits) and their standard errors (13.4).
"""
import csv
import json
import platform
import re
from pathlib import Path

import numpy as np
import scipy
import scipy.linalg

HERE = Path(__file__).resolve().parent
TABLES = {  # name: file, channels that enter the decomposition
    "wafer": ("handbook/pmc552_wafer_10x3.csv", 3),
    "hald": ("classic/hald_cement.csv", 4),
    "longley": ("classic/longley.csv", 6),
    "us_arrests": ("classic/us_arrests_1973.csv", 4),
    "iris_fisher": ("classic/iris_fisher.csv", 4),
    "stackloss": ("classic/stackloss.csv", 3),
    "chemical_two_methods": ("classic/chemical_two_methods_15x2.csv", 2),
}
REGRESSIONS = ["hald", "longley", "stackloss"]  # the response is the column after the channels
MATRIX = "classic/blood_chemistry_correlation.csv"


def read(file, columns):
    with open(HERE.parent / file, newline="") as f:
        rows = list(csv.reader(f))
    return rows[0][:columns], np.array([r[:columns] for r in rows[1:]], dtype=float)


def largest_positive(v):
    """Each column's entry of largest magnitude made positive."""
    top = v[np.abs(v).argmax(axis=0), np.arange(v.shape[1])]
    return v * np.sign(top)


def standardize(x):
    """Means and standard deviations (divisor n-1), and the SVD of the standardized rows."""
    m, s = x.mean(axis=0), x.std(axis=0, ddof=1)
    u, d, vt = scipy.linalg.svd((x - m) / s, full_matrices=False)
    return m, s, u, d, vt.T


def decomposition(file, columns):
    names, x = read(file, columns)
    m, s, _, d, v = standardize(x)
    return {"file": file, "rows": len(x), "channels": names, "means": m, "standard_deviations": s,
            "eigenvalues": d**2 / (len(x) - 1), "eigenvectors": largest_positive(v).T}


def matrix_decomposition(file):
    names, r = read(file, 8)
    values, v = scipy.linalg.eigh(r)
    return {"file": file, "rows": 72, "channels": names,
            "eigenvalues": values[::-1], "eigenvectors": largest_positive(v[:, ::-1]).T}


def regression(x, y, k):
    """Principal-component regression on the first k components of the standardized x: intercept and
    coefficients in original units, the sum of squared residuals, and standard errors (intercept first)
    that take means, scales and directions as given: Cov(b_z) = s² V_k diag(1/d²) V_k', mapped back."""
    m, s, u, d, v = standardize(x)
    n = len(y)
    residual = y - y.mean() - u[:, :k] @ (u[:, :k].T @ (y - y.mean()))
    b = v[:, :k] @ (u[:, :k].T @ (y - y.mean()) / d[:k]) / s
    sse = residual @ residual
    variance = sse / (n - k - 1)
    half = v[:, :k] / d[:k] / s[:, None]  # Cov(b) = variance · half half'
    slopes = np.sqrt(variance * (half**2).sum(axis=1))
    intercept = np.sqrt(variance * (1 / n + ((m @ half) ** 2).sum()))
    return {"components": k, "intercept": y.mean() - m @ b, "coefficients": b, "sse": sse,
            "standard_errors": np.r_[intercept, slopes]}


def leave_one_out(x, y, k):
    """Sum over rows of the squared error of a fit that never saw the row: means, scales and
    components are all found anew from the others."""
    press = 0.0
    for i in range(len(y)):
        rest = np.arange(len(y)) != i
        if k == 0:
            predicted = y[rest].mean()
        else:
            fit = regression(x[rest], y[rest], k)
            predicted = fit["intercept"] + x[i] @ fit["coefficients"]
        press += (y[i] - predicted) ** 2
    return press


def main():
    out = {"made_with": {"python": platform.python_version(), "numpy": np.__version__, "scipy": scipy.__version__},
           "correlation": {name: decomposition(*table) for name, table in TABLES.items()}}
    out["correlation"]["blood_chemistry"] = matrix_decomposition(MATRIX)
    out["regression"] = {}
    for name in REGRESSIONS:
        file, p = TABLES[name]
        names, table = read(file, p + 1)
        x, y = table[:, :p], table[:, p]
        out["regression"][name] = {"file": file, "response": names[p], "predictors": names[:p],
                                   "by_components": [regression(x, y, k) for k in range(1, p + 1)]}
        if name == "hald":
            out["regression"][name]["leave_one_out_press"] = [leave_one_out(x, y, k) for k in range(p + 1)]
    text = json.dumps(out, indent=1, default=lambda a: a.tolist())
    # One list of numbers or names a line.
    text = re.sub(r"\[\s*([^\[\]{}]*?)\s*\]", lambda m: "[" + re.sub(r"\s*\n\s*", " ", m[1]) + "]", text)
    (HERE / "small_tables.json").write_text(text + "\n")


if __name__ == "__main__":
    main()
