"""The exact law of need for known parameters, by SciPy, into need.json.

Run from this folder with NumPy 1.24 and SciPy 1.10: python3 make-need.py
Reads fitted.json (rates by hour of the week, hazards by block of the day, shares, all at their means). With these known,
need is M_t/M_t/infinity (Eick, Massey & Whitt 1993, Management Science 39, 241):
- those counted leave one by one: binomial with the survival exp(-integral of the hazard). Boarding patients leave by the
  boarding hazard; the others are in a stream with chances in proportion to the mean present by stream at the census,
  of the admitted only the share of their stay before the decision;
- patients with no area yet fall to area and stream in proportion to the arrivals of that hour;
- newcomers are Poisson with mean m, m' = rate - hazard m, solved in closed form between full hours.
Areas are independent but for the patients with no area yet. An hour's figures are those at its full hour, under the beds
in force then. Percentile: the smallest n with P(need <= n) >= p.
"""
import json
from datetime import datetime
from math import comb
from zoneinfo import ZoneInfo

import numpy as np
import scipy
from scipy.stats import binom, poisson

fitted = json.load(open('fitted.json'))
zone = ZoneInfo('Europe/London')
dispositions, boarding = 4, 4
size = 80


def instant(*local):
    return int(datetime(*local, tzinfo=zone).timestamp())


# Saturday evening; on Sunday at 01:00 the clocks go forward.
issued = instant(2026, 3, 28, 18, 10)
hours = [(issued // 3600 + 1 + i) * 3600 for i in range(36)]
areas = [
    {
        'census': {'takenAt': issued, 'present': 11, 'waiting': 3, 'boarding': 4},
        'staffedBeds': [[issued - 3600, 12], [instant(2026, 3, 28, 22), 9], [instant(2026, 3, 29, 7), 6], [instant(2026, 3, 29, 14), 10]],
    },
    {
        'census': {'takenAt': instant(2026, 3, 28, 17, 40), 'present': 5, 'waiting': 2, 'boarding': 0},
        'staffedBeds': [[issued - 3600, 6], [instant(2026, 3, 28, 22), 3], [instant(2026, 3, 29, 7, 30), 5]],
    },
]


def segments(begin, finish):
    """Cuts at every full hour: length in hours and the labels of the local time."""
    at = begin
    while at < finish:
        following = min(finish, (at // 3600 + 1) * 3600)
        here = datetime.fromtimestamp(at, zone)
        week = 24 * here.weekday() + here.hour
        block = here.hour // 2 + (12 if here.weekday() >= 5 else 0)
        yield (following - at) / 3600, week, block, here.hour // 4
        at = following


def hazard(a, s, block):
    return fitted['hazardPerHour'][a * (dispositions + 1) + s][block]


def survival(a, s, begin, finish):
    return np.exp(-sum(length * hazard(a, s, block) for length, _, block, _ in segments(begin, finish)))


def newcomers(a, begin, finish):
    """Mean present by disposition at the end of those who arrive from `begin` on."""
    mean = np.zeros(dispositions)
    for length, week, block, part in segments(begin, finish):
        for s in range(dispositions):
            mu = hazard(a, s, block)
            level = fitted['ratePerHour'][a][week] * fitted['shares'][a][part][s] / mu
            mean[s] = level + (mean[s] - level) * np.exp(-mu * length)
    return mean


def chances_counted(a):
    taken = areas[a]['census']['takenAt']
    # Four weeks back: nobody is left from before.
    weights = newcomers(a, taken - 28 * 86_400, taken)
    weights[1] *= fitted['shareBeforeDecision'][a]
    return weights / weights.sum()


def chances_undecided(at):
    _, week, _, part = next(segments(at, at + 60))
    weights = np.array(
        [[fitted['ratePerHour'][a][week] * fitted['shares'][a][part][s] for s in range(dispositions)] for a in range(len(areas))]
    )
    return weights / weights.sum()


n = np.arange(size)
shares = [chances_counted(a) for a in range(len(areas))]


def counted_law(a, at):
    census = areas[a]['census']
    taken = census['takenAt']
    stays = sum(shares[a][s] * survival(a, s, taken, at) for s in range(dispositions))
    law = poisson.pmf(n, newcomers(a, taken, at).sum())
    law = np.convolve(law, binom.pmf(n, census['present'] - census['boarding'], stays))[:size]
    return np.convolve(law, binom.pmf(n, census['boarding'], survival(a, boarding, taken, at)))[:size]


def beds(a, at):
    return [number for since, number in areas[a]['staffedBeds'] if since <= at][-1]


def summary(law, staffed):
    cdf = np.cumsum(law)
    highest = int(np.argmax(cdf > 1 - 1e-10)) + 1
    return {
        'cdf': cdf[:highest].round(13).tolist(),
        'mean': float((np.arange(len(law)) * law).sum()),
        'percentiles': [int(np.argmax(cdf >= p)) for p in (0.05, 0.1, 0.25, 0.5, 0.75, 0.9, 0.95)],
        'shortfall': float(law[staffed + 1:].sum()),
        'bedsForRisk10': int(np.argmax(1 - cdf <= 0.1)),
        'staffed': staffed,
    }


def scenario(undecided_at, patients):
    mix = chances_undecided(undecided_at)
    found = {'takenAt': undecided_at, 'waiting': patients, 'areas': [[] for _ in areas], 'pooled': [], 'someAreaShort': []}
    for at in hours:
        counted = [counted_law(a, at) for a in range(len(areas))]
        here = [sum(mix[a][s] * survival(a, s, undecided_at, at) for s in range(dispositions)) for a in range(len(areas))]
        staffed = [beds(a, at) for a in range(len(areas))]
        for a in range(len(areas)):
            law = np.convolve(counted[a], binom.pmf(n, patients, here[a]))[:size]
            found['areas'][a].append(summary(law, staffed[a]))
        pooled = np.convolve(np.convolve(*counted), binom.pmf(n, patients, sum(here)))
        found['pooled'].append(summary(pooled, sum(staffed)))
        # Nobody short: over how many of the undecided are in the first area, in the second, gone.
        calm = 0.0
        for i in range(patients + 1):
            for j in range(patients + 1 - i):
                chance = comb(patients, i) * comb(patients - i, j) * here[0] ** i * here[1] ** j * (1 - sum(here)) ** (patients - i - j)
                calm += chance * np.prod([counted[a][: staffed[a] + 1 - k].sum() for a, k in ((0, i), (1, j))])
        found['someAreaShort'].append(float(1 - calm))
    return found


json.dump(
    {
        'source': f'make-need.py: NumPy {np.__version__}, SciPy {scipy.__version__}, zoneinfo',
        'issuedAt': issued,
        'hours': hours,
        'areas': areas,
        'chances': [share.tolist() for share in shares],
        'counted': [[summary(counted_law(a, at), beds(a, at)) for at in hours] for a in range(len(areas))],
        # Counted with the rest, and before either area was.
        'undecidedNow': scenario(issued, 2),
        'undecidedEarlier': scenario(instant(2026, 3, 28, 17, 20), 4),
    },
    open('need.json', 'w'),
)
