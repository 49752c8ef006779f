"""Draws the visit log of Wrenhythe, a small hospital that does not exist, from a process stated here.

Run from this folder with NumPy 1.24: python3 make-visits.py
Writes visits.csv.gz (the product's own form), raw-export.csv.gz (as a patient system might export the same visits: other
names, local times with the day first and no offset, columns that mean nothing to planning) and truth.json.

The process, in Europe/London local time:
- Arrivals of two care areas in the 23 weeks from Monday 20 October 2025 to Sunday 29 March 2026: Poisson with a rate that
  depends on the hour of the week, times one gamma factor a day shared by both areas (mean 1, variance below). The clocks
  go back on 26 October and forward on 29 March.
- From 02:00 to 11:30 on Wednesday 14 January 2026 the patient system was down: arrivals of those hours were never
  entered, and what happened meanwhile to those present was entered when it came back.
- The disposition is drawn by area and by whether the patient arrived before or after 08:00.
- Home, transferred, left before treatment: the whole stay ends at a hazard that depends on area, disposition, two-hour block
  of the day, and weekday or weekend. Admitted: a decision after an exponential time, then boarding that ends at a hazard
  of the same kind; a few wait long for a place elsewhere.
- Times are written to the minute, rounded down. The extract was taken when the period ended: who was still present then
  has neither departure nor disposition.
"""
import csv
import gzip
import io
import json
from datetime import datetime, timezone
from zoneinfo import ZoneInfo

import numpy as np

rng = np.random.default_rng(20260329)
zone = ZoneInfo('Europe/London')


def instant(*local):
    return int(datetime(*local, tzinfo=zone).timestamp())


def local(at):
    return datetime.fromtimestamp(at, zone)


start, end = instant(2025, 10, 20), instant(2026, 3, 30)
outage = (instant(2026, 1, 14, 2, 0), instant(2026, 1, 14, 11, 30))
day_variance = 0.0064
areas = ['Acute', 'Minor injuries']
words = ['home', 'admitted', 'transferred', 'left before treatment']

# Arrivals an hour by hour of the week, Monday 00:00 first.
hour = np.arange(168) % 24
weekday = np.arange(168) // 24


def weekly(per_day, first, second, peak, days):
    lean = np.where(weekday >= 5, 1.0, 0.0)
    log = first * np.cos(2 * np.pi * (hour - peak + lean) / 24) + second * np.cos(4 * np.pi * (hour - 11) / 24)
    rate = np.exp(log) * np.array(days)[weekday]
    rate[(weekday == 0) & (hour >= 9) & (hour < 12)] *= 1.15
    return rate * per_day * 7 / rate.sum()


rates = [
    weekly(24, 0.62, 0.18, 15.5, [1.08, 1.02, 0.98, 0.98, 1.0, 0.95, 0.97]),
    weekly(17, 1.05, 0.25, 15.0, [1.04, 0.95, 0.93, 0.94, 0.97, 1.1, 1.12]),
]
# Shares of the four dispositions for arrivals before and after 08:00.
shares = [
    [[0.43, 0.46, 0.07, 0.04], [0.54, 0.36, 0.06, 0.04]],
    [[0.88, 0.05, 0.03, 0.04], [0.91, 0.02, 0.03, 0.04]],
]
# Departures an hour are hazard times the block's factor: twelve blocks of two hours, weekdays; weekends beside them.
treatment = np.array([0.55, 0.5, 0.5, 0.6, 1.05, 1.1, 1.2, 1.2, 1.2, 1.15, 1.1, 0.8])
wards = np.array([0.3, 0.25, 0.25, 0.35, 0.7, 1.1, 1.6, 1.8, 1.6, 1.3, 0.9, 0.5])
even = np.ones(12)
factors = {
    'treatment': np.concatenate([treatment, 0.95 * treatment]),
    'wards': np.concatenate([wards, 0.8 * wards]),
    'even': np.concatenate([even, even]),
}
# Per area: home, boarding (after the decision), transferred, left before treatment.
hazards = [
    {'home': (0.32, 'treatment'), 'boarding': (0.26, 'wards'), 'transferred': (0.2, 'treatment'), 'left': (0.5, 'even')},
    {'home': (0.6, 'treatment'), 'boarding': (0.26, 'wards'), 'transferred': (0.35, 'treatment'), 'left': (0.6, 'even')},
]
decision_mean = [2.8, 2.2]
long_share, long_mean = 0.02, 60.0
ambulance_share = [0.5, 0.06]

# Every UTC hour from the start on lies within one local hour: this zone's offset is a whole hour.
grid = np.arange(start, end + 60 * 86_400, 3600)
clock = [local(int(at)) for at in grid]
how = np.array([24 * at.weekday() + at.hour for at in clock])
block = np.array([at.hour // 2 + (12 if at.weekday() >= 5 else 0) for at in clock])
day = np.array([at.toordinal() for at in clock])
day_factor = rng.gamma(1 / day_variance, day_variance, size=day.max() - day.min() + 1)[day - day.min()]


def leaves(at, hazard, pattern):
    """Instants at which stays begun at `at` end: cumulative hazard reaches an exponential draw of mean 1."""
    steps = np.concatenate([[0], np.cumsum(hazard * factors[pattern][block[:-1]])])
    return np.interp(np.interp(at, grid, steps) + rng.exponential(size=len(at)), steps, grid)


def minute(seconds):
    return np.floor(seconds / 60) * 60


rows = []
for a, name in enumerate(areas):
    inside = grid < end
    counts = rng.poisson(rates[a][how[inside]] * day_factor[inside])
    arrival = minute(np.repeat(grid[inside], counts) + rng.uniform(0, 3600, counts.sum()))
    arrival = np.sort(arrival)
    n = len(arrival)
    night = np.array([local(int(at)).hour < 8 for at in arrival])
    steps = np.cumsum(np.array(shares[a]), axis=1)[np.where(night, 0, 1)]
    kind = np.minimum((rng.uniform(size=n)[:, None] >= steps).sum(axis=1), 3)
    departure = np.full(n, np.nan)
    decision = np.full(n, np.nan)
    for code, key in ((0, 'home'), (2, 'transferred'), (3, 'left')):
        mine = kind == code
        departure[mine] = leaves(arrival[mine], *hazards[a][key])
    mine = kind == 1
    decided = arrival[mine] + rng.exponential(3600 * decision_mean[a], mine.sum())
    gone = leaves(decided, *hazards[a]['boarding'])
    long = rng.uniform(size=mine.sum()) < long_share
    gone[long] = decided[long] + rng.exponential(3600 * long_mean, long.sum())
    decision[mine] = decided
    departure[mine] = gone
    # A bed space is given within the first third of the time to departure or decision; never to those who leave untreated.
    first = np.where(kind == 1, decision, departure) - arrival
    bed = np.where(kind == 3, np.nan, arrival + first * rng.uniform(0.05, 0.35, n))
    ambulance = rng.uniform(size=n) < ambulance_share[a]
    departure = np.maximum(minute(departure), arrival + 60)
    decision = minute(decision)
    bed = minute(bed)
    for times in (bed, decision, departure):
        times[(times >= outage[0]) & (times < outage[1])] = outage[1]
    for i in range(n):
        if outage[0] <= arrival[i] < outage[1]:
            continue
        present = departure[i] >= end
        known = [None if np.isnan(t) or t >= end else int(t) for t in (bed[i], decision[i], departure[i])]
        rows.append((int(arrival[i]), *known, name, '' if present else words[kind[i]], bool(ambulance[i])))
rows.sort(key=lambda row: (row[0], row[4]))


def write(name, header, lines):
    text = io.StringIO()
    writer = csv.writer(text, lineterminator='\r\n')
    writer.writerow(header)
    writer.writerows(lines)
    # No time of writing inside, so that the same log is the same file.
    with open(name, 'wb') as out, gzip.GzipFile(filename='', mode='wb', fileobj=out, compresslevel=9, mtime=0) as packed:
        packed.write(text.getvalue().encode())


def iso(at):
    return '' if at is None else datetime.fromtimestamp(at, timezone.utc).strftime('%Y-%m-%dT%H:%M:%SZ')


def day_first(at):
    return '' if at is None else local(at).strftime('%d/%m/%Y %H:%M')


write(
    'visits.csv.gz',
    ['arrival_at', 'bed_space_at', 'admission_decision_at', 'departure_at', 'care_area', 'disposition', 'arrived_by_ambulance'],
    [[*map(iso, row[:4]), row[4], row[5], 'yes' if row[6] else 'no'] for row in rows],
)
write(
    'raw-export.csv.gz',
    ['Extract run', 'Zone', 'Entrance', 'Booked in', 'First cubicle', 'Bed requested', 'Left department', 'Leaving route',
     'Brought by ambulance', 'Triage colour'],
    [
        ['R07', row[4], 'ABC'[i % 3], *map(day_first, row[:4]), row[5].capitalize(), 'Y' if row[6] else 'N',
         ['green', 'yellow', 'orange'][i * 7 % 3]]
        for i, row in enumerate(rows)
    ],
)
json.dump(
    {
        'source': f'make-visits.py: NumPy {np.__version__}, generator PCG64; hazards and rates an hour, hours of week from Monday 00:00, '
        'blocks of two hours, weekdays first, then weekends',
        'timeZone': zone.key,
        'from': start,
        'to': end,
        'takenAt': end,
        'outage': outage,
        'areas': areas,
        'dayFactorVariance': day_variance,
        'ratePerHour': [rate.tolist() for rate in rates],
        'shares': [[before, before, after, after, after, after] for before, after in shares],
        'hazardPerHour': [
            {key: (value * factors[pattern]).tolist() for key, (value, pattern) in one.items()} for one in hazards
        ],
    },
    open('truth.json', 'w'),
)
print(len(rows), 'visits')
