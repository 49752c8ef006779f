import { describe, expect, it } from 'vitest';
import { formatChance, riskWord } from '../../../shared/domain/risk-word.ts';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import { handoverSummary } from '../../../shared/forecasting/handover-summary.ts';
import type { SummaryArea, SummaryInput, SummaryOutlook } from '../../../shared/forecasting/handover-summary.ts';

/*
 * Words never say more than the numbers: every sentence is read back and each figure in it is looked up in what was
 * handed over, in 1,000 made-up outlooks (the product's own rule, no source outside it). Times are read in UTC.
 */
const zone = makeZone('UTC');
const start = Date.UTC(2026, 11, 1, 19, 12) / 1000;
const names = ['Alder', 'Birch', 'Cedar', 'Damson', 'Elm'];

/** mulberry32, enough to vary the made-up outlooks. */
function seeded(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (state + 0x6d2b79f5) >>> 0;
    let t = Math.imul(state ^ (state >>> 15), 1 | state);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 4_294_967_296;
  };
}

function makeCase(seed: number): SummaryInput {
  const random = seeded(seed);
  const whole = (most: number) => Math.floor(random() * (most + 1));
  const pick = <T>(from: readonly T[]) => from[Math.floor(random() * from.length)];
  const now = start + whole(7200);
  const first = now + (3600 - (now % 3600));
  const hours = Array.from({ length: pick([1, 14, 36]) }, (_, hour) => first + hour * 3600);
  const mood = pick([0.05, 0.3, 0.9, 1.2]);
  const areas: SummaryArea[] = [];
  const outlooks: SummaryOutlook['areas'][number][] = [];
  for (const name of names.slice(0, 1 + whole(4))) {
    const present = whole(30);
    const waiting = whole(present);
    areas.push({
      areaId: name,
      name,
      spaceKind: pick(['bed', 'chair'] as const),
      spaces: pick([4, 8, 9, 24]),
      alertLimit: pick([0.1, 0.25]),
      census:
        random() < 0.2
          ? null
          : { takenAt: now - whole(5 * 3600), present, waiting, boarding: whole(present - waiting) },
    });
    const chances = () => hours.map(() => ({ chance: Math.min(1, random() * mood), se: 0.004 }));
    outlooks.push({
      areaId: name,
      counted: areas[areas.length - 1].census !== null,
      shortfall: chances(),
      shortfallWithin: chances(),
      staffed: hours.map(() => whole(20)),
      need: { p90: hours.map(() => whole(Math.round(20 * mood))) },
    });
  }
  const done = Array.from({ length: pick([0, 1, 6]) }, (_, index) => ({
    kind: pick(['census', 'staffed beds', 'acknowledgement'] as const),
    at: now - 3600 + index * 60,
    by: pick(['Noor Charge', 'Sam Second']),
  }));
  const from = Date.UTC(2026, 11, 1, 21) / 1000;
  return {
    result: { hours, areas: outlooks },
    areas,
    shift: { name: 'Night', from, to: from + 37_800 },
    done,
    now,
    zone,
  };
}

const clock = (at: number) => new Date(at * 1000).toISOString().slice(11, 16);

/** Checks every claim of a sentence; returns what is left of it. */
function readBack(sentence: string, made: SummaryInput): string {
  const { result, areas, shift, done, now } = made;
  const within = result.hours.flatMap((at, index) => (at >= shift.from && at < shift.to && at > now ? [index] : []));
  const find = (name: string) => {
    const area = areas.find((candidate) => candidate.name === name);
    const outlook = result.areas.find((candidate) => candidate.areaId === name);
    if (!area?.census || !outlook) throw new Error(`${name} is spoken of without a count`);
    const printed = (area.spaces <= 8 ? outlook.shortfallWithin : outlook.shortfall).map(({ chance }) => chance);
    const past = within.filter((index) => printed[index] > area.alertLimit);
    return { area, outlook, printed, past, peak: Math.max(...within.map((index) => printed[index])) };
  };
  const at = (text: string) => within.find((index) => clock(result.hours[index]) === text) ?? -1;
  const counted = areas.filter((area) => area.census).map((area) => find(area.name));
  let left = sentence;
  const claim = (pattern: RegExp, check: (...parts: string[]) => void) => {
    left = left.replace(pattern, (...match) => {
      check(...(match.slice(1, -2) as string[]));
      return '';
    });
  };
  const peakIs = (name: string, chance: string, time: string) => {
    const { printed, peak } = find(name);
    expect(printed[at(time)]).toBe(peak);
    expect(chance).toBe(formatChance(peak));
  };
  claim(/; ((?:\w+(?:, | and )?)+) (?:is|are) not counted/g, (which) => {
    const uncounted = areas.filter((area) => !area.census).map((area) => area.name);
    expect(which.split(/, | and /)).toEqual(uncounted);
  });
  claim(
    /^Counted (?:at|from) ([\d:]+)(?: to ([\d:]+))?: (\d+) present, (\d+) waiting, (\d+) boarding\.$/,
    (...parts) => {
      const counts = counted.map(({ area }) => area.census!);
      const sum = (field: 'present' | 'waiting' | 'boarding') => counts.reduce((total, one) => total + one[field], 0);
      expect(parts[0]).toBe(clock(Math.min(...counts.map((one) => one.takenAt))));
      expect(parts[1] ?? parts[0]).toBe(clock(Math.max(...counts.map((one) => one.takenAt))));
      expect(parts.slice(2).map(Number)).toEqual([sum('present'), sum('waiting'), sum('boarding')]);
    },
  );
  claim(
    /^In the Night shift (\w+) passes its (\d+) % limit at (\d+) of (\d+) hours?, first at ([\d:]+); its highest chance of a shortfall is ([<>\d]+ %), ([a-z ]+), at ([\d:]+)\.$/,
    (name, limit, number, of, first, chance, word, time) => {
      const { area, past, peak } = find(name);
      expect(Number(limit)).toBe(Math.round(area.alertLimit * 100));
      expect([Number(number), Number(of)]).toEqual([past.length, within.length]);
      expect(at(first)).toBe(past[0]);
      peakIs(name, chance, time);
      expect(word).toBe(riskWord(peak).toLowerCase());
      for (const one of counted) if (one.past.length > 0) expect(one.peak).toBeLessThanOrEqual(peak);
    },
  );
  claim(/^(.*) pass(?:es its limit| their limits) too\.$/, (said) => {
    const named = [...said.matchAll(/(\w+) \(([<>\d]+ %) at ([\d:]+)\)/g)];
    for (const [, name, chance, time] of named) {
      peakIs(name, chance, time);
      expect(find(name).past.length).toBeGreaterThan(0);
    }
    expect(named).toHaveLength(counted.filter((one) => one.past.length > 0).length - 1);
  });
  claim(
    /^No counted area passes its limit in the Night shift; the highest chance of a shortfall is ([<>\d]+ %), ([a-z ]+): (\w+) at ([\d:]+)\.$/,
    (chance, word, name, time) => {
      peakIs(name, chance, time);
      expect(word).toBe(riskWord(find(name).peak).toLowerCase());
      for (const one of counted) {
        expect(one.past).toEqual([]);
        expect(one.peak).toBeLessThanOrEqual(find(name).peak);
      }
    },
  );
  const gap = (one: (typeof counted)[number]) =>
    Math.max(...within.map((index) => one.outlook.need.p90[index] - one.outlook.staffed[index]));
  claim(
    /^At P90 (\w+) needs (\d+) (bed|chair)s? at ([\d:]+) and has (\d+) staffed\.$/,
    (name, need, unit, time, staffed) => {
      const one = find(name);
      expect([one.outlook.need.p90[at(time)], one.outlook.staffed[at(time)]]).toEqual([Number(need), Number(staffed)]);
      expect(unit).toBe(one.area.spaceKind);
      expect(Number(need) - Number(staffed)).toBe(Math.max(...counted.map(gap)));
    },
  );
  claim(/^At P90 no counted area needs more than is staffed at any hour of it\.$/, () => {
    expect(Math.max(...counted.map(gap))).toBeLessThanOrEqual(0);
  });
  claim(/^Done so far: (.*), the last at ([\d:]+) by ([\w ]+)\.$/, (said, time, by) => {
    const number = (kind: string) => done.filter((entry) => entry.kind === kind).length;
    for (const [pattern, kind] of [
      [/(\d+) census/, 'census'],
      [/(\d+) changes? of staffed beds/, 'staffed beds'],
      [/(\d+) acknowledgement/, 'acknowledgement'],
    ] as const) {
      expect(Number(pattern.exec(said)?.[1] ?? 0)).toBe(number(kind));
    }
    expect([time, by]).toEqual([clock(done.at(-1)!.at), done.at(-1)!.by]);
  });
  claim(/^Nothing is noted as done so far\.$/, () => expect(done).toEqual([]));
  const oldest = Math.min(...counted.map(({ area }) => area.census!.takenAt));
  claim(/^Do not use after ([\d:]+)\.$/, (time) => {
    expect(time).toBe(clock(oldest + 4 * 3600));
    expect(now).toBeLessThanOrEqual(oldest + 4 * 3600);
  });
  claim(/^The census is more than 4 hours old: enter a new one before you act\.$/, () => {
    expect(now - oldest).toBeGreaterThan(4 * 3600);
  });
  claim(/^No area has a census\.$/, () => expect(counted).toEqual([]));
  claim(/^Nothing can be said of the Night shift until one is entered\.$/, () => expect(counted).toEqual([]));
  claim(/^This outlook holds no hour of the Night shift\.$/, () => expect(within).toEqual([]));
  return left;
}

describe('the handover in words', () => {
  it('says nothing but what the figures say, in three to six sentences, over 1,000 outlooks', () => {
    const openings = new Set<string>();
    for (let seed = 1; seed <= 1000; seed += 1) {
      const made = makeCase(seed);
      const said = handoverSummary(made);
      expect(said.length, said.join(' ')).toBeGreaterThanOrEqual(3);
      expect(said.length, said.join(' ')).toBeLessThanOrEqual(6);
      for (const sentence of said) {
        expect(readBack(sentence, made), sentence).toBe('');
        openings.add(sentence.split(' ').slice(0, 2).join(' '));
      }
    }
    // Every kind of sentence came up.
    for (const opening of [
      'No area',
      'Nothing can',
      'Nothing is',
      'Counted at',
      'Counted from',
      'In the',
      'No counted',
      'At P90',
      'Done so',
      'Do not',
      'The census',
      'This outlook',
    ]) {
      expect([...openings]).toContain(opening);
    }
  });

  it('names an area that was not counted and says nothing else of it', () => {
    for (let seed = 1; seed <= 200; seed += 1) {
      const made = makeCase(seed);
      const text = handoverSummary(made).join(' ');
      for (const area of made.areas) {
        if (area.census || !made.areas.some((other) => other.census)) continue;
        expect(text.split(area.name)).toHaveLength(2);
      }
    }
  });
});
