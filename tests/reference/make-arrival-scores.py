"""Makes arrival-scores.json: scores, mixtures, live factors, a penalised weekly profile and a filtered level, with NumPy and SciPy.

Everything is written out from its definition; nothing is taken from the project. Run from this folder:
python3 make-arrival-scores.py
"""
import json

import numpy as np
import scipy
from scipy import optimize, special, stats

rng = np.random.default_rng(20)
out = {"meta": {"numpy": np.__version__, "scipy": scipy.__version__}}


def smallest(cdf, p):
    n = 0
    while cdf(n) < p * (1 - 1e-12):
        n += 1
    return n


def scored(cdf, logpmf, y):
    q = {str(t): smallest(cdf, t) for t in (0.05, 0.1, 0.25, 0.5, 0.75, 0.9, 0.95)}
    intervals = {}
    for level in (0.5, 0.8, 0.9, 0.95):
        low, high = smallest(cdf, (1 - level) / 2), smallest(cdf, (1 + level) / 2)
        intervals[str(level)] = {"low": low, "high": high, "mass": cdf(high) - (cdf(low - 1) if low > 0 else 0)}
    rps, n = 0.0, 0
    while True:
        gap = cdf(n) - (1 if n >= y else 0)
        rps += gap * gap
        if n > y and 1 - cdf(n) < 1e-12:
            break
        n += 1
    return {
        "y": y,
        "logScore": -logpmf(y),
        "quantiles": q,
        "pinball": {t: (float(t) - (y < v)) * (y - v) for t, v in q.items()},
        "intervals": intervals,
        "pit": [cdf(y - 1) if y > 0 else 0.0, cdf(y)],
        "rankedProbability": rps,
    }


# Gamma–Poisson forecasts: mean m, variance m + phi m².
cases = []
for m, phi, y in [(6.6, 0.02, 9), (0.4, 0.5, 0), (159, 0.004, 141), (159, 0.004, 190), (1113, 0.003, 1040), (2.5, 1.5, 12)]:
    law = stats.nbinom(1 / phi, 1 / (1 + phi * m))
    cases.append({"mean": m, "phi": phi, **scored(lambda n: float(law.cdf(n)), lambda n: float(law.logpmf(n)), y)})
out["gammaPoisson"] = cases

# Equal mixtures of Poisson laws.
cases = []
for means, y in [([4.0, 6.5, 7.0, 9.25], 8), ([140.0, 150.0, 156.0, 171.0, 180.0], 133), ([0.0, 0.2, 3.0], 1), ([900.0, 1100.0], 1000)]:
    a = np.array(means)
    cdf = lambda n: float(np.mean(stats.poisson.cdf(n, a)))
    logpmf = lambda n: float(special.logsumexp(stats.poisson.logpmf(n, a)) - np.log(len(a)))
    cases.append({"means": means, **scored(cdf, logpmf, y)})
out["mixture"] = cases

# A gamma factor after n arrivals where L were expected: by Bayes' rule on a grid, not by conjugacy.
cases = []
for phi, n, L in [(0.004, 70, 55.0), (0.01, 30, 48.0), (0.05, 0, 12.0), (0.002, 400, 350.0)]:
    w = np.linspace(1e-6, 3, 400_001)
    logp = stats.gamma.logpdf(w, 1 / phi, scale=phi) + stats.poisson.logpmf(n, L * w)
    p = np.exp(logp - logp.max())
    p /= p.sum()
    mean = float((w * p).sum())
    cases.append({"phi": phi, "count": n, "expected": L, "mean": mean, "sd": float(np.sqrt(((w - mean) ** 2 * p).sum()))})
out["liveGamma"] = cases

# Two normal log multipliers behind one count, and one count each: posterior mode by a general optimiser.
cases = []
for mean, cov, counts in [
    ([0.0, 0.0], [[0.01, 0.006], [0.006, 0.01]], [[80, [30.0, 30.0]]]),
    ([0.05, 0.02], [[0.02, 0.005], [0.005, 0.03]], [[50, [40.0, 0.0]], [9, [0.0, 14.0]]]),
]:
    precision = np.linalg.inv(np.array(cov))

    def loss(x):
        d = x - np.array(mean)
        value = 0.5 * d @ precision @ d
        for n, e in counts:
            rate = float(np.exp(x) @ np.array(e))
            value += rate - n * np.log(rate)
        return value

    best = optimize.minimize(loss, np.array(mean), method="Nelder-Mead", options={"xatol": 1e-10, "fatol": 1e-13, "maxiter": 10_000})
    cases.append({"mean": mean, "covariance": cov, "counts": counts, "mode": best.x.tolist()})
out["liveNormal"] = cases

# Weekly profile: N_h negative binomial about E_h s_h with size kappa, log s = centre + B beta, beta normal; then the
# gamma posterior mean (kappa + N) / (kappa / s + E).
hours = np.arange(168)
daily = [(7 * j, "daily", 1 / j**3) for j in range(1, 12)]
terms = [(k, "weekly", 1.0) for k in range(1, 4)]
terms += [(7 * j + side, "mixed", 1 / j**2) for j in (1, 2) for side in (-3, -2, -1, 1, 2, 3)]
scales = {"daily": 0.3, "weekday": 0.005, "weekly": 0.01, "mixed": 0.003}
kappa = 50.0
angle = 2 * np.pi * (hours + 0.5) / 168
terms = daily + terms
columns = [np.ones(168), np.sin(84 * angle)] + [(hours // 24 == d).astype(float) for d in range(7)]
B = np.column_stack(columns + [f(c * angle) for c, _, _ in terms for f in (np.sin, np.cos)])
prior = np.array([1.0, scales["daily"] / 12**3] + 7 * [scales["weekday"]] + [v * scales[f] for _, f, v in terms for _ in (0, 1)])
E = rng.uniform(10, 14, 168)
N = rng.poisson(E * 5 * np.exp(0.6 * np.sin(2 * np.pi * (hours - 8) / 24) + 0.1 * (hours < 24)))
centre = np.log((N.sum() + 0.5) / E.sum())


def penalised(beta):
    eta = centre + B @ beta
    m = E * np.exp(eta)
    loglik = np.sum(N * eta - (N + kappa) * np.log(m + kappa))
    gradient = B.T @ (N - (N + kappa) * m / (m + kappa)) - beta / prior
    return -(loglik - 0.5 * np.sum(beta**2 / prior)), -gradient


beta = np.zeros(len(prior))
for _ in range(3):
    beta = optimize.minimize(penalised, beta, jac=True, method="BFGS", options={"gtol": 1e-9, "maxiter": 5000}).x
smooth = np.exp(centre + B @ beta)
out["profile"] = {
    "counts": N.tolist(),
    "exposure": E.tolist(),
    "scales": {**scales, "shrinkage": kappa},
    "ratePerHour": ((kappa + N) / (kappa / smooth + E)).tolist(),
}

# A level that walks: exact filter on a fine grid. y_t ~ Poisson(e exp(L_t)), L_t = L_{t-1} + N(0, q), L_0 ~ N(0, 0.5²).
q, e, days = 4e-4, 35.0, 80
level = np.cumsum(rng.normal(0, np.sqrt(q), days))
y = rng.poisson(e * np.exp(level))
grid = np.linspace(-2.5, 2.5, 6001)
step = grid[1] - grid[0]
half = int(np.ceil(8 * np.sqrt(q) / step))
kernel = stats.norm.pdf(np.arange(-half, half + 1) * step, 0, np.sqrt(q)) * step
p = stats.norm.pdf(grid, 0, 0.5)
p /= p.sum()
logprob = 0.0
for n in y:
    p = np.convolve(p, kernel, mode="same")
    p /= p.sum()
    like = stats.poisson.pmf(n, e * np.exp(grid))
    logprob += float(np.log((p * like).sum()))
    p = p * like
    p /= p.sum()
mean = float((grid * p).sum())
out["walkingLevel"] = {
    "variancePerDay": q,
    "expected": e,
    "counts": y.tolist(),
    "mean": mean,
    "sd": float(np.sqrt((grid**2 * p).sum() - mean**2)),
    "logProbability": logprob,
}

with open("arrival-scores.json", "w") as f:
    json.dump(out, f, indent=1)
    f.write("\n")
