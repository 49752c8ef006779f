"""Makes arrival-process.json: tests of the Poisson process on two real series, with NumPy and SciPy 1.10.1.

Run from this folder: python3 make-arrival-process.py
"""
import json

import numpy as np
from scipy import stats

source = json.load(open('real-event-times.json'))
coal = np.array(source['coalMiningDisasters'])
icu = np.sort(np.array(source['intensiveCareArrivals']))


def conditional(times, breaks):
    parts = []
    for i in range(len(breaks) - 1):
        last = i + 2 == len(breaks)
        inside = times[(times >= breaks[i]) & ((times <= breaks[i + 1]) if last else (times < breaks[i + 1]))]
        parts.append((inside - breaks[i]) / (breaks[i + 1] - breaks[i]))
    return parts


def durbin(u):
    u = np.sort(u)
    n = len(u)
    gaps = np.sort(np.diff(np.concatenate([[0], u, [1]])))
    scaled = (n + 1 - np.arange(n + 1)) * np.diff(np.concatenate([[0], gaps]))
    return np.minimum(np.cumsum(scaled)[:n], 1)


def logs(parts):
    found = []
    for u in parts:
        n = len(u)
        before = np.concatenate([[0], u[:-1]])
        with np.errstate(divide='ignore'):
            found.append(-(n - np.arange(n)) * np.log((1 - u) / (1 - before)))
    return np.concatenate(found)


def ks(values, law='uniform'):
    result = stats.kstest(values, law)
    return {'n': len(values), 'statistic': float(result.statistic), 'p': float(result.pvalue)}


def all_forms(times, breaks):
    parts = conditional(times, breaks)
    pooled = np.concatenate(parts)
    return {
        'breaks': [float(b) for b in breaks],
        'conditionalUniform': ks(pooled),
        'lewis': ks(durbin(pooled)),
        'log': ks(logs(parts), 'expon'),
    }


def dispersion(counts):
    counts = np.array(counts, dtype=float)
    statistic = float(((counts - counts.mean()) ** 2).sum() / counts.mean())
    df = len(counts) - 1
    return {'counts': counts.tolist(), 'statistic': statistic, 'df': df, 'p': float(stats.chi2.sf(statistic, df))}


unrounded = np.sort(icu + np.random.default_rng(1).uniform(0, 5 / 60, len(icu)))
whole_day = [0.0, 24.0]
hours = list(range(25))
reference = {
    'source': 'make-arrival-process.py, NumPy 1.24.2, SciPy 1.10.1 kstest (exact two-sided p); data in real-event-times.json',
    'coal': all_forms(coal, [1851.0, 1963.0]),
    'icuRaw': all_forms(icu, whole_day),
    'icuRawByHour': all_forms(icu, hours),
    'icuUnroundedTimes': unrounded.tolist(),
    'icuUnrounded': all_forms(unrounded, whole_day),
    'icuUnroundedByHour': all_forms(unrounded, hours),
    'dispersion': {
        'icuByHour': dispersion(np.histogram(icu, bins=hours)[0]),
        'coalByDecade': dispersion(np.histogram(coal, bins=np.arange(1851, 1962, 10))[0]),
    },
    'kolmogorov': [
        {'n': n, 'd': d, 'p': float(stats.kstwo.sf(d, n))}
        for n in (1, 2, 5, 10, 25, 50, 100, 140, 200, 254, 400, 500, 1000, 5000)
        for d in [x / np.sqrt(n) for x in (0.3, 0.5, 0.7, 0.9, 1.1, 1.36, 1.63, 1.95, 2.3, 3.0)]
        if 0.5 / n < d < 1
    ],
}
json.dump(reference, open('arrival-process.json', 'w'))
for name in ('coal', 'icuRaw', 'icuRawByHour', 'icuUnrounded', 'icuUnroundedByHour'):
    print(name, {k: v for k, v in reference[name].items() if k != 'breaks'})
