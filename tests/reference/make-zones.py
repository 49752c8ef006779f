"""Makes zones.json with Python's zoneinfo: clock changes, offsets, repeated and skipped times, elapsed time by label.

Run from this folder: python3 make-zones.py
"""
import json
from datetime import datetime, timedelta, timezone
from zoneinfo import ZoneInfo

# Years in which each zone's rules are settled history; Sao Paulo gave up summer time in 2019, Casablanca keeps
# summer time all year from 2018 and leaves it for Ramadan.
zones = {
    'Europe/London': (2013, 2025),
    'America/New_York': (2013, 2025),
    'Pacific/Auckland': (2013, 2025),
    'Australia/Lord_Howe': (2013, 2025),
    'Asia/Kolkata': (2013, 2025),
    'Asia/Kathmandu': (2013, 2025),
    'Africa/Casablanca': (2016, 2024),
    'America/Sao_Paulo': (2013, 2022),
    'UTC': (2013, 2025),
}
epoch = datetime(1970, 1, 1, tzinfo=timezone.utc)
quarter = 900


def offset(zone, at):
    return int((epoch + timedelta(seconds=at)).astimezone(zone).utcoffset().total_seconds())


def instant(year, month=1, day=1, hour=0):
    return int((datetime(year, month, day, hour, tzinfo=timezone.utc) - epoch).total_seconds())


def all_changes(zone, start, end):
    found = []
    before = offset(zone, start)
    for at in range(start + quarter, end + 1, quarter):
        after = offset(zone, at)
        if after != before:
            found.append({'at': at, 'offset': after})
        before = after
    return found


def instants_showing(zone, local):
    """Every UTC instant at which the wall clock shows `local` seconds, by trying every offset on a quarter hour."""
    return [
        local - guess for guess in range(15 * 3600, -15 * 3600, -quarter) if offset(zone, local - guess) == guess
    ]


def exposure(zone, start, end):
    """Elapsed hours by local hour label, minute by minute."""
    minutes = {}
    for at in range(start, end, 60):
        label = (at + offset(zone, at)) // 3600
        minutes[label] = minutes.get(label, 0) + 1
    first, last = min(minutes), max(minutes)
    return {
        'from': start,
        'to': end,
        'firstLocalHour': first,
        'hours': [minutes.get(label, 0) / 60 for label in range(first, last + 1)],
    }


def parts(zone, at):
    local = (epoch + timedelta(seconds=at)).astimezone(zone)
    return {
        'at': at,
        'offset': offset(zone, at),
        'year': local.year,
        'month': local.month,
        'day': local.day,
        'hour': local.hour,
        'minute': local.minute,
        'weekday': local.isoweekday(),
        'date': local.date().isoformat(),
        'hourOfWeek': 24 * (local.isoweekday() - 1) + local.hour,
    }


reference = {
    'source': 'make-zones.py: Python zoneinfo (IANA time zone database)',
    'zones': [],
}
for name, (first, last) in zones.items():
    zone = ZoneInfo(name)
    start, end = instant(first), instant(last + 1)
    found = all_changes(zone, start, end)
    near = found[:4] + found[-4:] if len(found) > 8 else found
    samples = [parts(zone, instant(year, month, 17, (month * 5) % 24)) for year in (first, last) for month in (1, 4, 7, 10)]
    local_times = []
    windows = []
    for change in near:
        at = change['at']
        for step in (-86400, -3600, -1800, -60, -1, 0, 1, 60, 1800, 3600, 86400):
            samples.append(parts(zone, at + step))
        old = offset(zone, at - 1)
        for local in sorted(
            {at + base + step for base in (old, change['offset']) for step in (-3600, -1800, -900, 0, 900, 1799, 1800, 3599, 3600)}
        ):
            local_times.append({'local': local, 'instants': instants_showing(zone, local)})
        windows += [
            exposure(zone, at - 5 * 3600, at + 6 * 3600),
            exposure(zone, at - 20 * 60, at + 40 * 60),
            exposure(zone, at, at + 2 * 3600),
            exposure(zone, at - 2 * 3600, at),
        ]
    windows.append(exposure(zone, start + 1234 * 60, start + 1234 * 60 + 50 * 3600))
    reference['zones'].append(
        {
            'name': name,
            'from': start,
            'to': end,
            'changes': found,
            'samples': samples,
            'localTimes': local_times,
            'exposure': windows,
        }
    )
json.dump(reference, open('zones.json', 'w'))
