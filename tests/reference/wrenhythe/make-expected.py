"""Works out from visits.csv.gz, minute by minute, what a fit must find in it, and writes expected.json.

Run from this folder with NumPy 1.24 and SciPy 1.10, after make-visits.py: python3 make-expected.py
Of truth.json only the period and the outage are read. Conventions:
- exposure: real hours with each local hour's label, the outage taken out;
- stays: arrivals that are 72 h old when the extract was taken, and whose stay no outage could have cut short or
  delayed within 72 h of their arrival; longer stays are censored at 72 h;
- limits: chi-squared at 95 % (Garwood 1936; Lawless 2003, section 4.1).
"""
import csv
import gzip
import json
from datetime import datetime, timezone
from zoneinfo import ZoneInfo

import numpy as np
import scipy
from scipy.stats import chi2

truth = json.load(open('truth.json'))
zone = ZoneInfo(truth['timeZone'])
start, end, outage, areas = truth['from'], truth['to'], truth['outage'], truth['areas']
words = ['home', 'admitted', 'transferred', 'left before treatment']
cap = 72 * 3600


def parse(text):
    return np.nan if text == '' else datetime.strptime(text, '%Y-%m-%dT%H:%M:%SZ').replace(tzinfo=timezone.utc).timestamp()


rows = list(csv.DictReader(gzip.open('visits.csv.gz', 'rt', newline='')))
arrival, bed, decision, departure = (
    np.array([parse(row[column]) for row in rows])
    for column in ('arrival_at', 'bed_space_at', 'admission_decision_at', 'departure_at')
)
area = np.array([areas.index(row['care_area']) for row in rows])
kind = np.array([words.index(row['disposition']) if row['disposition'] else 255 for row in rows])

# Labels of every minute from the start until the last stay in the fit can end.
minutes = np.arange(start, end + cap, 60)
hours_local = {int(at): datetime.fromtimestamp(int(at), zone) for at in np.unique(minutes // 3600 * 3600)}
clock = [hours_local[int(at)] for at in minutes // 3600 * 3600]
how = np.array([24 * at.weekday() + at.hour for at in clock])
block = np.array([at.hour // 2 + (12 if at.weekday() >= 5 else 0) for at in clock])
day = np.array([at.toordinal() for at in clock])
inside = (minutes < end) & ~((minutes >= outage[0]) & (minutes < outage[1]))


def at_minute(times):
    return ((times - start) // 60).astype(int)


def limits(events, exposure):
    low = chi2.ppf(0.025, 2 * events) / (2 * exposure) if events > 0 else 0.0
    return [low, chi2.ppf(0.975, 2 * events + 2) / (2 * exposure)]


def dispersion(groups):
    groups = [np.array(group) for group in groups if len(group) > 1 and sum(group) > 0]
    statistic = sum(((group - group.mean()) ** 2).sum() / group.mean() for group in groups)
    df = sum(len(group) - 1 for group in groups)
    return {'statistic': statistic, 'df': df, 'index': statistic / df, 'p': chi2.sf(statistic, df)}


# Arrivals.
exposure = np.bincount(how[inside], minlength=168) / 60
counts = [np.bincount(how[at_minute(arrival[area == a])], minlength=168) for a in range(len(areas))]
first_day = day[0]
days = day[minutes < end].max() - first_day + 1
by_day = [np.bincount(day[at_minute(arrival[area == a])] - first_day, minlength=days) for a in range(len(areas))]
day_hours = np.bincount(day[inside] - first_day, minlength=days) / 60

# One cell for each local hour: those with exactly one hour of exposure can be compared with each other.
cell = (day - first_day) * 24 + how % 24
cell_hours = np.bincount(cell[inside], minlength=days * 24) / 60
site = np.bincount(cell[at_minute(arrival)], minlength=days * 24)
plain = cell_hours == 1
hour_groups = [site[168 * np.arange(days // 7) + h][plain[168 * np.arange(days // 7) + h]] for h in range(168)]
odd = np.flatnonzero(~plain)
whole = day_hours == 24
totals = sum(by_day)
day_groups = [totals[d::7][whole[d::7]] for d in range(7)]

# Stays.
used = (arrival < end - cap) & ~((arrival >= outage[0] - cap) & (arrival < outage[1]))
assert not np.isnan(departure[used]).any(), 'somebody used has not left yet'
ticks = [np.concatenate([[0], np.cumsum(block == b)]) / 60 for b in range(24)]


def stream(a, name, rows_in, begins):
    over = departure[rows_in] - begins > cap
    ends = np.where(over, begins + cap, departure[rows_in])
    risk = [(tick[at_minute(ends)] - tick[at_minute(begins)]).sum() for tick in ticks]
    # Intervals at risk are (begin, end]: who leaves at the very end of a block leaves in it, as in survival analysis.
    last = np.where(ends > begins, ends - 60, ends)[~over]
    left = [int((block[at_minute(last)] == b).sum()) for b in range(24)]
    hours = (ends - begins).sum() / 3600
    events = int((~over).sum())
    assert abs(sum(risk) - hours) < 1e-6 and sum(left) == events
    return {
        'area': a,
        'stream': name,
        'visits': len(ends),
        'censored': int(over.sum()),
        'departures': events,
        'hoursAtRisk': hours,
        'departuresPerHour': events / hours,
        'limits': limits(events, hours),
        'blockDepartures': left,
        'blockHoursAtRisk': risk,
    }


streams = []
for a in range(len(areas)):
    for code, word in enumerate(words):
        mine = used & (area == a) & (kind == code)
        streams.append(stream(a, word, mine, arrival[mine]))
    mine = used & (area == a) & (kind == 1)
    streams.append(stream(a, 'boarding', mine, decision[mine]))
admitted = [used & (area == a) & (kind == 1) for a in range(len(areas))]
share_counts = [
    [
        [int((used & (area == a) & (kind == code) & (how[at_minute(arrival)] % 24 // 4 == b)).sum()) for code in range(4)]
        for b in range(6)
    ]
    for a in range(len(areas))
]

# Patients present at each full hour, from the fourth day on; not within a day of the outage.
full = np.arange(start + cap, end, 3600)
full = full[~((full >= outage[0]) & (full < outage[1] + 86_400))]
present = np.array(
    [[((area == a) & (arrival <= at) & ~(departure <= at)).sum() for at in full] for a in range(len(areas))]
)
label = how[at_minute(full)]


def by_hour_of_week(values):
    return [values[label == h] for h in range(168)]


repeated = [
    i + 1
    for i in range(len(rows))
    if any(not np.isnan(t[i]) and datetime.fromtimestamp(t[i], zone).replace(fold=0).utcoffset()
           != datetime.fromtimestamp(t[i], zone).replace(fold=1).utcoffset()
           for t in (arrival, bed, decision, departure))
]

json.dump(
    {
        'source': f'make-expected.py: NumPy {np.__version__}, SciPy {scipy.__version__}, zoneinfo',
        'rows': len(rows),
        'stillPresent': int(np.isnan(departure).sum()),
        'recorded': {
            'departure': int((~np.isnan(departure)).sum()),
            'bedSpace': int((~np.isnan(bed)).sum()),
            'admissionDecision': int((~np.isnan(decision)).sum()),
            'disposition': int((kind < 4).sum()),
        },
        'visitsByArea': [int((area == a).sum()) for a in range(len(areas))],
        'exposureHours': exposure.tolist(),
        'oddHours': [
            {'day': int(i // 24), 'hour': int(i % 24), 'exposureHours': float(cell_hours[i]), 'arrivals': int(site[i])} for i in odd
        ],
        'dayHours': day_hours.tolist(),
        'counts': [c.tolist() for c in counts],
        'dayCounts': [c.tolist() for c in by_day],
        'ratePerHour': [(c / exposure).tolist() for c in counts],
        'limits': [[limits(int(n), e) for n, e in zip(c, exposure)] for c in counts],
        'hourDispersion': dispersion(hour_groups),
        'dayDispersion': dispersion(day_groups),
        'streams': streams,
        'shareBeforeDecision': [
            float((decision[m] - arrival[m]).sum() / (departure[m] - arrival[m]).sum()) for m in admitted
        ],
        'shareCounts': share_counts,
        'present': [
            {
                'mean': [float(v.mean()) for v in by_hour_of_week(present[a])],
                'se': [float(v.std(ddof=1) / len(v) ** 0.5) for v in by_hour_of_week(present[a])],
                'p90': [float(np.quantile(v, 0.9, method='inverted_cdf')) for v in by_hour_of_week(present[a])],
            }
            for a in range(len(areas))
        ],
        'rowsInRepeatedHour': repeated,
    },
    open('expected.json', 'w'),
)
print('repeated hour in rows', repeated)
