"""Makes track-scores.json: scores of kept forecasts with NumPy and SciPy alone.

A kept histogram is scored as the mixture of its replications and, with the weight of ten of them, the negative binomial of the
same mean and variance; a kept mixture as equal Poisson laws. Everything is written out from its definition; nothing is taken from
the project. Run from this folder: python3 make-track-scores.py
"""
import json

import numpy as np
import scipy
from scipy import special, stats

LEVELS = (0.05, 0.1, 0.25, 0.5, 0.75, 0.9, 0.95)
INTERVALS = (0.5, 0.8, 0.9, 0.95)
rng = np.random.default_rng(411)


def score(pmf, y, v):
    """Scores of the law with these probabilities of 0, 1, 2, ... (long enough to hold all but 1e-12)."""
    cdf = np.cumsum(pmf)
    quantile = lambda p: int(np.argmax(cdf >= p * (1 - 1e-12)))
    n = np.arange(len(pmf))
    q = [quantile(t) for t in LEVELS]
    pin = lambda t, c, x: np.where(x >= c, t * (x - c), (1 - t) * (c - x))
    lower = float(cdf[y - 1]) if y > 0 else 0.0
    upper = float(cdf[y])
    out = {
        "logScore": float(-np.log(pmf[y])),
        "pinball": [float(pin(t, c, y)) for t, c in zip(LEVELS, q)],
        "median": quantile(0.5),
        "absoluteError": abs(y - quantile(0.5)),
        "pitLower": lower,
        "pitUpper": upper,
        "pit": lower + v * (upper - lower),
        "intervals": [],
    }
    for level in INTERVALS:
        low, high = quantile((1 - level) / 2), quantile((1 + level) / 2)
        out["intervals"].append([low, high, float(cdf[high] - (cdf[low - 1] if low > 0 else 0))])
    return out, float(np.mean([np.sum(pmf * pin(t, c, n)) for t, c in zip(LEVELS, q)])), float(np.sum(pmf * abs(n - quantile(0.5))))


def histogram_pmf(first, counts):
    n = np.arange(first + len(counts))
    full = np.zeros(len(n))
    full[first:] = counts
    total = full.sum()
    mean = (full * n).sum() / total
    var = (full * n * n).sum() / total - mean * mean
    phi = max(0.0, (var - mean) / mean**2)
    long = np.arange(len(n) + 400)
    smooth = stats.poisson.pmf(long, mean) if phi == 0 else stats.nbinom.pmf(long, 1 / phi, 1 / (1 + phi * mean))
    share = 10 / (total + 10)
    pmf = share * smooth
    pmf[: len(n)] += (1 - share) * full / total
    return pmf


cases = []
for mean, phi, replications, y in [(22, 0.02, 10000, 27), (5, 0.0, 500, 2), (48, 0.01, 500, 66), (0.6, 0.3, 2000, 0), (12, 0.05, 400, 31)]:
    draws = rng.poisson(mean * (rng.gamma(1 / phi, phi, replications) if phi else 1), replications)
    first = int(draws.min())
    counts = np.bincount(draws - first).tolist()
    v = float(rng.uniform())
    scored, floor_pinball, floor_error = score(histogram_pmf(first, counts), y, v)
    cases.append({"law": {"first": first, "counts": counts}, "observed": y, "v": v, "floor": "its own law",
                  "score": {**scored, "floorPinball": floor_pinball, "floorError": floor_error}})

for centre, spread, y in [(262, 0.06, 281), (71, 0.1, 50), (3.2, 0.3, 4)]:
    means = np.round(np.sort(centre * np.exp(spread * rng.standard_normal(50))), 3)
    n = np.arange(int(centre * 3 + 60))
    pmf = np.exp(special.logsumexp(stats.poisson.logpmf(n[:, None], means[None, :]), axis=1) - np.log(50))
    v = float(rng.uniform())
    scored, _, _ = score(pmf, y, v)
    _, floor_pinball, floor_error = score(stats.poisson.pmf(n, means.mean()), y, v)
    cases.append({"law": {"means": means.tolist()}, "observed": y, "v": v, "floor": "known rates",
                  "score": {**scored, "floorPinball": floor_pinball, "floorError": floor_error}})

with open("track-scores.json", "w") as file:
    json.dump({"meta": {"numpy": np.__version__, "scipy": scipy.__version__}, "cases": cases}, file, indent=1)
    file.write("\n")
