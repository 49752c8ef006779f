"""Makes span-sums.json: percentiles of arrivals summed over hours, shifts, days and a week, where the days' factors are
known laws, by exact convolution of negative binomial laws (SciPy) and, where no closed form exists, by simulation (NumPy).

Two areas; arrivals an hour in area a at local hour h of a day of weekday d (0 Monday):
    area 0: (2 + 6 * (10 <= h < 22)) * (1.2 if d in (0, 5) else 1)
    area 1: 1 + (h % 3)

"gamma by calendar day": one gamma factor of mean 1 and variance PHI a day, shared by areas and hours, times sqrt(1 + PHI):
the model's level is that at which a lognormal factor has median 1, and so the mean exp(s^2 / 2) with s^2 = log(1 + PHI).
"log-AR(1) on 6 h blocks": the log factor of 6 h blocks is a stationary AR(1) of variance VAR, correlation RHO, mean 0.

Run from this folder: python3 make-span-sums.py
"""
import json

import numpy as np
import scipy
from scipy import stats

PHI, VAR, RHO = 0.03, 0.02, 0.6
SHARES = [0.2, 0.25, 0.3, 0.35, 0.4, 0.45]  # by ambulance, 4 h blocks of the day, both areas
LEVELS = [0.025, 0.1, 0.25, 0.5, 0.75, 0.9, 0.975]
ROOM = 6000


def rate(area, day, hour):
    if area == 0:
        return (2 + 6 * (10 <= hour < 22)) * (1.2 if day % 7 in (0, 5) else 1)
    return 1 + hour % 3


def total(day, hour):
    return rate(0, day, hour) + rate(1, day, hour)


def law(mean):
    """Negative binomial with variance mean + PHI mean^2."""
    n = 1 / PHI
    mean = mean * np.sqrt(1 + PHI)
    return stats.nbinom(n, n / (n + mean)).pmf(np.arange(ROOM))


def quantiles(pmf):
    cdf = np.cumsum(pmf)
    return [int(np.searchsorted(cdf, p)) for p in LEVELS]


def convolved(means):
    out = np.array([1.0])
    for mean in means:
        out = np.convolve(out, law(mean))[:ROOM]
    return out


def day_mean(day, of=total, hours=range(24)):
    return sum(of(day, h) for h in hours)


# Monday is day 0; the stretch begins on Monday 00:00.
gamma = {
    "hour": quantiles(law(total(0, 12))),
    "day": quantiles(law(day_mean(0))),
    "day, area 0": quantiles(law(day_mean(0, lambda d, h: rate(0, d, h)))),
    "night": quantiles(convolved([day_mean(0, hours=range(21, 24)), day_mean(1, hours=range(0, 7))])),
    "week": quantiles(convolved([day_mean(d) for d in range(7)])),
    "day, by ambulance": quantiles(law(sum(total(0, h) * SHARES[h // 4] for h in range(24)))),
    # What adding up hourly percentiles would give for the day: not the day's own.
    "sum of hourly percentiles": [sum(quantiles(law(total(0, h)))[k] for h in range(24)) for k in range(7)],
}

rng = np.random.default_rng(20260712)
DRAWS = 1_000_000
blocks = 28
u = np.empty((blocks, DRAWS), dtype=np.float32)
u[0] = rng.standard_normal(DRAWS) * np.sqrt(VAR)
for k in range(1, blocks):
    u[k] = RHO * u[k - 1] + rng.standard_normal(DRAWS) * np.sqrt(VAR * (1 - RHO**2))
counts = np.empty((blocks, DRAWS), dtype=np.int32)
for k in range(blocks):
    mean = sum(total(k // 4, (k % 4) * 6 + h) for h in range(6))
    counts[k] = rng.poisson(mean * np.exp(u[k]))
blocked = {
    "day": [int(np.quantile(counts[:4].sum(axis=0), p, method="inverted_cdf")) for p in LEVELS],
    "week": [int(np.quantile(counts.sum(axis=0), p, method="inverted_cdf")) for p in LEVELS],
}

out = {
    "source": f"SciPy {scipy.__version__}, NumPy {np.__version__}: make-span-sums.py",
    "phi": PHI,
    "variance": VAR,
    "correlation": RHO,
    "shares": SHARES,
    "levels": LEVELS,
    "gamma by calendar day": gamma,
    "log-AR(1) on 6 h blocks": blocked,
}
with open("span-sums.json", "w") as file:
    json.dump(out, file, indent=1)
    file.write("\n")
