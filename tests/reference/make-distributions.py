"""Makes distributions.json with mpmath (50 digits, direct summation), SciPy and NumPy.

Run from this folder: python3 make-distributions.py
"""
import json

import mpmath as mp
import numpy as np
import scipy
from scipy import special, stats

mp.mp.dps = 50


def poisson_term(n, m):
    return mp.exp(n * mp.log(m) - m - mp.loggamma(n + 1))


def gamma_poisson_term(n, m, phi):
    r = 1 / mp.mpf(phi)
    return mp.exp(
        mp.loggamma(n + r) - mp.loggamma(r) - mp.loggamma(n + 1) + n * mp.log(m / (r + m)) - r * mp.log1p(m / r)
    )


def binomial_term(k, n, p):
    return mp.binomial(n, k) * mp.power(p, k) * mp.power(1 - mp.mpf(p), n - k)


def row(n, term, highest=None, **parameters):
    """log pmf, P(N <= n) and P(N > n), summed term by term in both directions."""
    lower = mp.mpf(0)
    step = None
    for k in range(n, -1, -1):
        t = term(k)
        lower += t
        if step is not None and t < step and t < lower * mp.mpf(10) ** -30:
            break
        step = t
    upper = mp.mpf(0)
    step = None
    k = n + 1
    while highest is None or k <= highest:
        t = term(k)
        upper += t
        if step is not None and t < step and t < upper * mp.mpf(10) ** -25:
            break
        step = t
        k += 1
    return {
        **parameters,
        'n': n,
        'logPmf': float(mp.log(term(n))),
        'pmf': float(term(n)),
        'cdf': float(lower),
        'exceedance': float(upper),
    }


def around(mean, sd, lows=(-8, -5, -3, -1.5, 0, 1.5, 3, 5, 8)):
    return sorted({max(0, int(round(mean + z * sd))) for z in lows})


poisson = [
    row(n, lambda k, m=m: poisson_term(k, mp.mpf(m)), mean=m)
    for m in (1e-6, 0.05, 0.7, 3, 9.5, 10, 37.25, 159, 170.5, 700, 2000)
    for n in around(m, m**0.5)
]
gamma_poisson = [
    row(n, lambda k, m=m, phi=phi: gamma_poisson_term(k, mp.mpf(m), phi), mean=m, phi=phi)
    for m in (0.05, 0.7, 9.5, 159, 2000)
    for phi in (1e-12, 1e-9, 1e-6, 0.0025, 0.05, 0.5)
    for n in around(m, (m + phi * m * m) ** 0.5, (-5, -2, 0, 2, 5))
]
for m, phi in ((3, 1), (3, 2.5), (20, 1.7), (0.4, 10)):
    for n in (0, 1, 3, 20, 90):
        gamma_poisson.append(row(n, lambda k: gamma_poisson_term(k, mp.mpf(m), phi), mean=m, phi=phi))
binomial = [
    row(k, lambda j, n=n, p=p: binomial_term(j, n, p), highest=n, trials=n, chance=p)
    for n in (1, 5, 20, 100, 2000, 20000)
    for p in (1e-9, 0.01, 0.1, 0.3, 0.5, 0.9, 0.999)
    for k in around(n * p, (n * p * (1 - p)) ** 0.5, (-5, -2, 0, 2, 5))
    if k < n
]

shapes = (0.01, 0.3, 0.5, 1, 2.5, 12, 80, 400, 2000)
gamma_cdf = []
for a in shapes:
    for z in (-6, -3, -1, 0, 1, 3, 6):
        x = a * max(0.05, 1 + z / a**0.5)
        upper = mp.gammainc(a, x, mp.inf, regularized=True)
        lower = mp.gammainc(a, 0, x, regularized=True)
        gamma_cdf.append({'x': x, 'shape': a, 'cdf': float(lower), 'exceedance': float(upper)})
gamma_quantile = [
    {'p': p, 'shape': a, 'x': float(stats.gamma.ppf(p, a))}
    for a in (0.1, 0.3, 0.5, 1, 2.5, 12, 80, 400, 2000, 1e5)
    for p in (1e-8, 1e-4, 0.025, 0.25, 0.5, 0.9, 0.975, 0.9999)
]

points = (1e-8, 0.01, 0.5, 0.99, 1, 1.5, 2, 3.7, 9.99, 10, 14.5, 15, 33, 170.5, 2000, 1e6)
gamma_functions = [
    {
        'x': x,
        'logGamma': float(mp.loggamma(x)),
    }
    for x in points
]
normal = [
    {'x': x, 'cdf': float(mp.ncdf(x))} for x in (-37, -20, -8.3, -5, -3, -1.96, -1, -0.1, 0, 0.3, 1, 2.5, 4, 6, 8)
]
normal_quantile = [
    {'p': p, 'x': float(special.ndtri(p))}
    for p in (1e-300, 1e-100, 1e-20, 1e-8, 0.001, 0.025, 0.07, 0.08, 0.3, 0.5, 0.6, 0.92, 0.93, 0.975, 0.9999, 1 - 1e-12)
]

quadrature = []
for phi in (0.0025, 0.05, 0.5, 1, 3):
    for count in (1, 2, 5, 9, 16):
        x, w = special.roots_genlaguerre(count, 1 / phi - 1) if phi > 0.01 else (None, None)
        if x is None:
            # SciPy's weights overflow for so large an exponent: mpmath's Jacobi matrix instead.
            alpha = mp.mpf(1) / mp.mpf(phi) - 1
            jacobi = mp.zeros(count)
            for i in range(count):
                jacobi[i, i] = 2 * i + 1 + alpha
                if i + 1 < count:
                    jacobi[i, i + 1] = jacobi[i + 1, i] = mp.sqrt((i + 1) * (i + 1 + alpha))
            values, vectors = mp.eigsy(jacobi)
            x = [values[i] for i in range(count)]
            w = [vectors[0, i] ** 2 for i in range(count)]
        else:
            w = w / w.sum()
        quadrature.append(
            {'phi': phi, 'count': count, 'nodes': [float(v * mp.mpf(phi)) for v in x], 'weights': [float(v) for v in w]}
        )
hermite = []
for count in (1, 2, 3, 7, 20):
    x, w = np.polynomial.hermite_e.hermegauss(count)
    hermite.append({'count': count, 'nodes': x.tolist(), 'weights': (w / w.sum()).tolist()})

sample = np.sort(np.random.default_rng(3).normal(10, 4, 23).round(2))
sample_quantiles = [
    {
        'p': p,
        'type7': float(np.quantile(sample, p)),
        'smallest': float(np.quantile(sample, p, method='inverted_cdf')),
    }
    for p in (0, 0.05, 0.1, 0.25, 0.5, 0.77, 0.9, 0.975, 1)
]

json.dump(
    {
        'source': f'make-distributions.py: probabilities and gamma functions by mpmath {mp.__version__} in 50 digits '
        f'(term-by-term sums); gamma and normal quantiles, Gauss nodes by SciPy {scipy.__version__}; sample quantiles '
        f'by NumPy {np.__version__}',
        'poisson': poisson,
        'gammaPoisson': gamma_poisson,
        'binomial': binomial,
        'gammaCdf': gamma_cdf,
        'gammaQuantile': gamma_quantile,
        'gammaFunctions': gamma_functions,
        'normalCdf': normal,
        'normalQuantile': normal_quantile,
        'gammaNodes': quadrature,
        'normalNodes': hermite,
        'sample': sample.tolist(),
        'sampleQuantiles': sample_quantiles,
    },
    open('distributions.json', 'w'),
)
