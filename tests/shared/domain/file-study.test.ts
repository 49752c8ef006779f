import { describe, expect, test } from 'vitest';
import { makeVisitLog } from '../../../demo/make-visit-log.ts';
import { siteProcesses } from '../../../demo/visit-process.ts';
import { acceptingChange } from '../../../shared/domain/accepting-change.ts';
import { FileStudyBuilder, type FileStudy, type StudyOptions } from '../../../shared/domain/file-study.ts';
import { findEmptyRuns } from '../../../shared/domain/find-empty-runs.ts';
import { findHeaps } from '../../../shared/domain/find-heaps.ts';
import { findLevelShifts } from '../../../shared/domain/find-level-shifts.ts';
import { notRecorded, type VisitRow } from '../../../shared/domain/visit-row.ts';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import { drawPoisson } from '../../../shared/stochastic/poisson.ts';
import { makeStream } from '../../../shared/stochastic/random.ts';

const hour = 3600;
const day = 86_400;
const at = (text: string) => Date.parse(text) / 1000;
const zone = makeZone('Europe/London');

function row(arrivalAt: number, area = 0, departureAt = NaN): VisitRow {
  return {
    area,
    arrivalAt,
    departureAt,
    bedSpaceAt: NaN,
    admissionDecisionAt: NaN,
    disposition: notRecorded,
    byAmbulance: notRecorded,
  };
}

/** Poisson arrivals at a rate an hour, evenly over each hour. */
function arrivals(from: number, to: number, rateAt: (at: number) => number, seed: number): number[] {
  const stream = makeStream(seed, 1);
  const times: number[] = [];
  for (let start = from; start < to; start += hour) {
    const count = drawPoisson(stream, rateAt(start));
    for (let index = 0; index < count; index += 1) times.push(start + Math.floor(stream.uniform() * hour));
  }
  return times;
}

function study(rows: Iterable<VisitRow>, more: Partial<StudyOptions> = {}): FileStudy {
  const builder = new FileStudyBuilder({ zone, shiftEnds: [], covered: [], ...more });
  for (const each of rows) builder.add(each);
  const found = builder.study();
  if (!found) throw new Error('no visit');
  return found;
}

describe('gaps', () => {
  const from = at('2026-01-05T00:00:00Z');
  const to = from + 20 * 7 * day;

  test('a run is reported from the number of arrivals at which chance would leave it in one file of a hundred', () => {
    // 4 whole weeks at one arrival an hour: the bound is ln(672 / 0.01) = 11.115, by hand.
    const counts = new Float64Array(672).fill(1);
    const exposure = new Float64Array(672).fill(1);
    const gapped = (hours: number) => {
      const copy = counts.slice();
      copy.fill(0, 300, 300 + hours);
      return findEmptyRuns(copy, exposure, -72);
    };
    expect(gapped(11)).toEqual([]);
    expect(gapped(12)).toEqual([{ first: 300, last: 311, expected: 12 }]);
  });

  test('an hour that does not exist, or is left out, neither makes nor breaks a run', () => {
    const counts = new Float64Array(672).fill(1);
    const exposure = new Float64Array(672).fill(1);
    counts.fill(0, 100, 113);
    exposure[106] = 0;
    expect(findEmptyRuns(counts, exposure, -72)).toEqual([{ first: 100, last: 112, expected: 12 }]);
  });

  test('of the whole department are told once; of one area by the area; in the site’s own hours', () => {
    const lost = { from: at('2026-02-10T06:00:00Z'), to: at('2026-02-10T14:00:00Z') };
    const away = { from: at('2026-04-20T00:00:00Z'), to: at('2026-04-25T00:00:00Z') };
    const inside = (span: { from: number; to: number }, time: number) => time >= span.from && time < span.to;
    const acute = arrivals(from, to, () => 5, 11).filter((time) => !inside(lost, time));
    const minor = arrivals(from, to, () => 1, 12).filter((time) => !inside(lost, time) && !inside(away, time));
    const { gaps } = study([...acute.map((time) => row(time)), ...minor.map((time) => row(time, 1))]);
    expect(gaps.map(({ area }) => area)).toEqual([null, 1]);
    expect(gaps[0]).toMatchObject(lost);
    // 5 arrivals an hour and 1 in the other area.
    expect(gaps[0].expected).toBeGreaterThan(40);
    expect(gaps[0].expected).toBeLessThan(56);
    // The area's own run may begin and end a few empty hours outside.
    expect(gaps[1].from).toBeLessThanOrEqual(away.from);
    expect(gaps[1].from).toBeGreaterThan(away.from - 8 * hour);
    expect(gaps[1].to).toBeGreaterThanOrEqual(away.to);
  });

  test('the night of the clock change is no gap', () => {
    const times = arrivals(at('2026-03-02T00:00:00Z'), at('2026-11-30T00:00:00Z'), () => 4, 13);
    expect(study(times.map((time) => row(time))).gaps).toEqual([]);
  });
});

describe('changes of level', () => {
  test('a step is found at its week; a season and single odd weeks are not taken for one', () => {
    const week = (index: number) => 1000 + 80 * Math.sin((2 * Math.PI * index) / 52);
    const stream = makeStream(21, 1);
    const calm = Array.from({ length: 104 }, (_, index) => drawPoisson(stream, week(index)));
    calm[30] = 700;
    expect(findLevelShifts(calm)).toEqual([]);
    const stepped = calm.map((total, index) => (index < 60 ? total : Math.round(total * 1.3)));
    const found = findLevelShifts(stepped);
    expect(found.map((shift) => shift.week)).toEqual([60]);
    expect(found[0].after / found[0].before).toBeGreaterThan(1.2);
  });

  test('weeks that are not whole are left out; too few say nothing', () => {
    expect(findLevelShifts([500, 500, 500, 500, 900, 900, 900])).toEqual([]);
    expect(findLevelShifts([500, 500, 500, 500, NaN, 900, 900, 900, 900])).toEqual([
      { week: 5, before: 500, after: 900 },
    ]);
  });

  test('is told with the instant of its Monday', () => {
    const from = at('2026-01-05T00:00:00Z');
    const change = at('2026-06-14T23:00:00Z');
    const times = arrivals(from, from + 40 * 7 * day, (time) => (time < change ? 5 : 7), 22);
    const { levelShifts } = study(times.map((time) => row(time)));
    expect(levelShifts.filter(({ area }) => area === null).map((shift) => shift.at)).toEqual([change]);
  });
});

describe('heaping', () => {
  const even = () => new Uint32Array(1440).fill(10);

  test('times spread evenly are none', () => {
    expect(findHeaps(even(), [420, 900, 1260])).toEqual([]);
  });

  test('at full hours, at 23:59 and at a shift’s end, each told with what was expected', () => {
    const hours = even();
    for (let minute = 0; minute < 1440; minute += 60) hours[minute] = 60;
    expect(findHeaps(hours, [420])).toMatchObject([{ kind: 'full hour', minute: null, times: 1440 }]);

    const midnight = even();
    midnight[1439] = 100;
    expect(findHeaps(midnight, [420])).toEqual([{ kind: 'end of day', minute: 1439, times: 100, expected: 10 }]);

    const shift = even();
    shift[418] = 150;
    // 11 minutes of ten, and 140 more.
    expect(findHeaps(shift, [420, 900])).toEqual([{ kind: 'shift end', minute: 420, times: 250, expected: 110 }]);
  });

  test('too few times say nothing', () => {
    const few = new Uint32Array(1440);
    few[0] = 199;
    expect(findHeaps(few, [])).toEqual([]);
  });
});

describe('an invented year of a department without faults', () => {
  // Seasons, holidays and day-to-day variation are to pass as plausible; the generator's outages are left out.
  test('has no gap, change of level or heap', () => {
    const [siteId] = Object.keys(siteProcesses);
    const from = at('2025-01-06T00:00:00Z');
    const visits = makeVisitLog({
      site: { id: siteId, timeZone: 'Europe/London' },
      from,
      to: from + 364 * day,
      seed: 3,
      withUnrecorded: true,
    });
    const ids = siteProcesses[siteId].areas.map(({ areaId }) => areaId);
    const found = study(
      visits.map(({ areaId, arrivalAt, departureAt }) => row(arrivalAt, ids.indexOf(areaId), departureAt ?? NaN)),
      { shiftEnds: [450, 930, 1290] },
    );
    expect(found.gaps).toEqual([]);
    expect(found.levelShifts).toEqual([]);
    expect(found.heaps).toEqual([]);
  });
});

describe('what accepting would change', () => {
  test('rows count as new where no log covers their arrival', () => {
    const rows = [0, 1, 2, 3].map((index) => row(at('2026-05-01T00:00:00Z') + index * hour));
    const covered = [{ from: at('2026-05-01T01:00:00Z'), to: at('2026-05-01T03:00:00Z') }];
    expect(study(rows, { covered }).newRows).toBe(2);
  });

  test('hours newly covered, and the logs that would give way', () => {
    const logs = [
      { id: 'old', counts: [{ from: 0, to: 10 * hour }] },
      {
        id: 'split',
        counts: [
          { from: 10 * hour, to: 12 * hour },
          { from: 20 * hour, to: 30 * hour },
        ],
      },
      { id: 'away', counts: [{ from: 100 * hour, to: 200 * hour }] },
    ];
    expect(acceptingChange({ from: 9 * hour, to: 25 * hour }, logs)).toEqual({
      newHours: 8,
      replaces: [
        { id: 'split', hours: 7 },
        { id: 'old', hours: 1 },
      ],
    });
  });
});
