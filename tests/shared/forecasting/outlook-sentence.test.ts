import { describe, expect, it } from 'vitest';
import { formatChance, riskStep, riskWord } from '../../../shared/domain/risk-word.ts';
import { localParts, makeZone } from '../../../shared/domain/zoned-time.ts';
import { outlookSentence, staleCensusSeconds } from '../../../shared/forecasting/outlook-sentence.ts';
import type { SentenceFigures, SentenceOutlook } from '../../../shared/forecasting/outlook-sentence.ts';
import { printedShortfall } from '../../../shared/forecasting/printed-shortfall.ts';
import { countInWords } from '../../../shared/forecasting/remedy-sentence.ts';
import type { SentenceArea } from '../../../shared/forecasting/remedy-sentence.ts';
import { endOfTonight, hoursOfTonight } from '../../../shared/forecasting/tonight-span.ts';

/** mulberry32: a small seeded generator, enough to vary the made-up outlooks. */
function seeded(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (state + 0x6d2b79f5) >>> 0;
    let t = Math.imul(state ^ (state >>> 15), 1 | state);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 4_294_967_296;
  };
}

const names = ['Alder', 'Birch', 'Cedar', 'Damson', 'Elm', 'Fir'];
const zones = ['Europe/London', 'Pacific/Auckland', 'Australia/Lord_Howe', 'Asia/Kolkata', 'America/New_York'].map(
  makeZone,
);
/** Chances at and about every bound of the words, besides ordinary ones. */
const edges = [
  0, 0.004, 0.005, 0.0449, 0.045, 0.2449, 0.245, 0.25, 0.251, 0.4949, 0.495, 0.7949, 0.795, 0.9949, 0.995, 1,
];

interface Case {
  result: SentenceOutlook;
  areas: SentenceArea[];
  now: number;
  zone: (typeof zones)[number];
}

function makeCase(seed: number): Case {
  const random = seeded(seed);
  const pick = <T>(from: readonly T[]) => from[Math.floor(random() * from.length)];
  const zone = pick(zones);
  const now =
    Date.UTC(2026, Math.floor(random() * 12), 1 + Math.floor(random() * 28)) / 1000 + Math.floor(random() * 86_400);
  const local = zone.toLocal(now);
  const first = now + (3600 - (local % 3600));
  const hours = Array.from({ length: 12 + Math.floor(random() * 25) }, (_, hour) => first + hour * 3600);
  const midnight = now - (local % 86_400);
  const shifts = [-1, 0, 1].flatMap((day) => [
    { from: midnight + day * 86_400 + 7 * 3600, to: midnight + day * 86_400 + 21.5 * 3600 },
    { from: midnight + day * 86_400 + 21 * 3600, to: midnight + day * 86_400 + 31.5 * 3600 },
  ]);
  const mood = pick(['quiet', 'mixed', 'mixed', 'bad', 'edges'] as const);
  const count = 1 + Math.floor(random() * 6);
  const areas: SentenceArea[] = [];
  const outlooks: SentenceFigures[] = [];
  for (let index = 0; index < count; index += 1) {
    const limit = pick([0.03, 0.1, 0.25, 0.4]);
    const spaces = pick([4, 8, 9, 24]);
    const level = mood === 'quiet' ? 0.05 : mood === 'bad' ? 0.9 : random();
    const chances = hours.map(() => (mood === 'edges' ? pick(edges) : Math.min(1, level * random() * 1.2)));
    const printed = chances.map((chance) => ({ chance, se: 0.004 }));
    const other = hours.map(() => ({ chance: random(), se: 0.004 }));
    const counted = random() > 0.15;
    const add = chances.map((chance) => (chance > limit ? 1 + Math.floor(chance * 14 * random()) : 0));
    const boarders = random() > 0.5;
    areas.push({
      areaId: names[index].toLowerCase(),
      name: names[index],
      spaceKind: random() > 0.7 ? 'chair' : 'bed',
      spaces,
      alertLimit: limit,
      censusTakenAt: counted ? now - Math.floor(random() ** 3 * 7 * 3600) : null,
    });
    outlooks.push({
      areaId: names[index].toLowerCase(),
      counted,
      shifts,
      shortfall: spaces <= 8 ? other : printed,
      shortfallWithin: spaces <= 8 ? printed : other,
      bedsToAdd: add,
      bedsThatDoNotExist: add
        .map((beds) => (random() > 0.6 ? Math.floor(beds * random() * 1.3) : 0))
        .map((missing, at) => Math.min(missing, add[at])),
      shortfallWithEverySpace: random() > 0.3 ? other : undefined,
      boardingOut: boarders ? { patients: 1 + Math.floor(random() * 6), by: first + 1800 } : null,
    });
  }
  return { result: { hours, areas: outlooks }, areas, now, zone };
}

/** Reads every claim of a text against the outlook and returns what is left of it. */
function checkClaims(text: string, made: Case): string {
  const { result, areas, now, zone } = made;
  const window = hoursOfTonight(result, now, zone);
  const clock = (at: number) => {
    const { hour, minute } = localParts(zone.toLocal(at));
    return `${String(hour).padStart(2, '0')}:${String(minute).padStart(2, '0')}`;
  };
  const find = (name: string) => {
    const area = areas.find((candidate) => candidate.name === name);
    const outlook = result.areas.find((candidate) => candidate.areaId === area?.areaId);
    if (!area || !outlook) throw new Error(`the sentence names ${name}, which does not exist`);
    return { area, outlook, printed: printedShortfall(outlook, area.spaces).map((cell) => cell.chance) };
  };
  /** Tonight's hours with this time on the clock; two where a clock change repeats it. */
  const at = (time: string) => {
    const found = window.filter((index) => clock(result.hours[index]) === time);
    expect(found, `${time} is an hour of tonight`).not.toHaveLength(0);
    return found;
  };
  const isCounted = (area: SentenceArea) => area.censusTakenAt !== null && find(area.name).outlook.counted;
  const pastOf = (name: string) => {
    const { area, printed } = find(name);
    return window.filter((index) => printed[index] > area.alertLimit);
  };
  const peakOf = (name: string) => Math.max(...window.map((index) => find(name).printed[index]));
  let left = text;
  let worst = '';
  const claim = (pattern: RegExp, check: (...parts: string[]) => void) => {
    left = left.replace(pattern, (...match) => {
      check(...(match.slice(1, -2) as string[]));
      return '';
    });
  };
  const isWorst = (name: string) => {
    worst = name;
    expect(isCounted(find(name).area)).toBe(true);
    expect(pastOf(name)).not.toHaveLength(0);
    for (const area of areas) {
      if (isCounted(area) && pastOf(area.name).length > 0) expect(peakOf(area.name)).toBeLessThanOrEqual(peakOf(name));
    }
  };
  const carriesWord = (name: string, word: string, link: string, time: string) => {
    isWorst(name);
    const { printed } = find(name);
    const index = at(time).find((hour) => riskWord(printed[hour]).toLowerCase() === word) ?? -1;
    expect(window, `${name} is ${word} at ${time}`).toContain(index);
    const step = riskStep(printed[index]);
    for (const earlier of window.filter((hour) => hour < index)) expect(riskStep(printed[earlier])).toBeLessThan(step);
    for (const hour of window) expect(riskStep(printed[hour])).toBeLessThanOrEqual(step);
    const next = window[window.indexOf(index) + 1];
    expect(link).toBe(next !== undefined && riskStep(printed[next]) === step ? 'from' : 'at');
  };
  const passesFrom = (name: string, word: string, time: string) => {
    isWorst(name);
    expect(riskWord(peakOf(name)).toLowerCase()).toBe(word);
    expect(at(time)).toContain(pastOf(name)[0]);
  };

  claim(/(\w+) is (very likely|likely) to run short (from|at) (\d\d:\d\d)\. ?/, (name, word, link, time) =>
    carriesWord(name, word, link, time),
  );
  claim(/A shortfall in (\w+) is (possible) (from|at) (\d\d:\d\d)\. ?/, (name, word, link, time) =>
    carriesWord(name, word, link, time),
  );
  claim(/(\w+) is (unlikely) to run short, yet passes its limit from (\d\d:\d\d)\. ?/, (name, word, time) =>
    passesFrom(name, word, time),
  );
  claim(
    /The chance of a shortfall in (\w+) is (remote), yet passes its limit from (\d\d:\d\d)\. ?/,
    (name, word, time) => passesFrom(name, word, time),
  );
  claim(/No (counted )?area passes its limit up to (\d\d:\d\d)\. ?/, (counted, time) => {
    expect(at(time)).toContain(window.at(-1));
    expect(counted !== undefined).toBe(areas.some((area) => !isCounted(area)));
    for (const area of areas) if (isCounted(area)) expect(pastOf(area.name)).toHaveLength(0);
  });
  claim(
    /The highest chance of a shortfall is ([<>]?\d+ %), ([a-z ]+): (\w+) at (\d\d:\d\d)\. ?/,
    (figure, word, name, time) => {
      const { printed } = find(name);
      const chance = printed[at(time).find((hour) => formatChance(printed[hour]) === figure) ?? -1];
      expect(chance, `${name} at ${time}`).toBeDefined();
      expect(riskWord(chance).toLowerCase()).toBe(word);
      for (const area of areas) if (isCounted(area)) expect(peakOf(area.name)).toBeLessThanOrEqual(chance);
    },
  );
  claim(
    /After that, (\w+) passes its limit at (\d\d:\d\d) on (\w+) \(([<>]?\d+ %)\)\. ?/,
    (name, time, day, figure) => {
      const { area, printed } = find(name);
      const weekdays = ['Monday', 'Tuesday', 'Wednesday', 'Thursday', 'Friday', 'Saturday', 'Sunday'];
      const index = result.hours.findIndex(
        (hour, place) =>
          place > (window.at(-1) ?? -1) &&
          clock(hour) === time &&
          weekdays[localParts(zone.toLocal(hour)).weekday - 1] === day,
      );
      expect(formatChance(printed[index])).toBe(figure);
      expect(printed[index]).toBeGreaterThan(area.alertLimit);
    },
  );
  const number = (word: string) => {
    const found = Array.from({ length: 200 }, (_, count) => count).find(
      (count) => countInWords(count) === word.toLowerCase(),
    );
    if (found === undefined) throw new Error(`not a number: ${word}`);
    return found;
  };
  const adds = () =>
    pastOf(worst)
      .map((index) => ({ index, beds: find(worst).outlook.bedsToAdd[index] }))
      .filter((add) => add.beds > 0);
  claim(
    /(Up to )?(\w+) more staffed (bed|chair)s? (?:at|from) (\d\d:\d\d)(?: to (\d\d:\d\d))?(?:, easing to (\w+) by (\d\d:\d\d),)? brings? (?:it|every hour|those hours) to the (\d+) % limit or under\. ?/,
    (upTo, most, kind, from, to, eased, by, limit) => {
      const { area } = find(worst);
      expect(kind).toBe(area.spaceKind);
      expect(Number(limit)).toBe(Math.round(area.alertLimit * 100));
      expect(number(most)).toBe(Math.max(...adds().map((add) => add.beds)));
      expect(at(from)).toContain(adds()[0].index);
      if (upTo === undefined) expect(number(most)).toBe(adds()[0].beds);
      if (to !== undefined) expect(at(to)).toContain(adds().at(-1)?.index);
      if (by !== undefined) {
        expect(at(by)).toContain(adds().at(-1)?.index);
        expect(number(eased)).toBe(adds().at(-1)?.beds);
      }
    },
  );
  claim(
    /At (\d\d:\d\d) no further (?:bed space|chair)s exist(?:; with every [a-z ]+ staffed ([<>]?\d+ %) remains)?\. ?/,
    (time, remains) => {
      const index = at(time).find(
        (hour) => find(worst).outlook.bedsThatDoNotExist[hour] === find(worst).outlook.bedsToAdd[hour],
      );
      expect(index).toBeDefined();
      if (remains !== undefined)
        expect(formatChance(find(worst).outlook.shortfallWithEverySpace?.[index ?? -1].chance ?? -1)).toBe(remains);
    },
  );
  claim(
    /At (\d\d:\d\d) (\w+) of the (\w+) (?:does not exist as a|do not exist as) (?:bed space|chair)s?(?:; with every [a-z ]+ staffed ([<>]?\d+ %) remains)?\. ?/,
    (time, missing, of, remains) => {
      const { outlook } = find(worst);
      const index = at(time).find((hour) => outlook.bedsToAdd[hour] === number(of)) ?? -1;
      expect(outlook.bedsThatDoNotExist[index]).toBe(number(missing));
      if (remains !== undefined)
        expect(formatChance(outlook.shortfallWithEverySpace?.[index].chance ?? -1)).toBe(remains);
    },
  );
  claim(/Or (\w+) boarding patients? out by (\d\d:\d\d), for the hours of that shift\. ?/, (patients, time) => {
    const { boardingOut } = find(worst).outlook;
    expect(boardingOut?.patients).toBe(number(patients));
    expect(clock(boardingOut?.by ?? 0)).toBe(time);
  });
  claim(/It passes its (\d+) % limit from (\d\d:\d\d)\. ?/, (limit, time) => {
    expect(Number(limit)).toBe(Math.round(find(worst).area.alertLimit * 100));
    expect(at(time)).toContain(pastOf(worst)[0]);
  });
  const others = new Set<string>();
  claim(/((?:\w+ \([^)]*\)(?:, | and )?)+) pass(?:es)? (?:its limit|their limits) too\. ?/, (list) => {
    for (const [, name, figure, time] of list.matchAll(/(\w+) \(([<>]?\d+ %) at (\d\d:\d\d)\)/g)) {
      others.add(name);
      const { area, printed } = find(name);
      expect(isCounted(area)).toBe(true);
      const index = at(time).find((hour) => formatChance(printed[hour]) === figure);
      expect(index).toBeDefined();
      expect(printed[index ?? -1]).toBe(peakOf(name));
      expect(printed[index ?? -1]).toBeGreaterThan(area.alertLimit);
    }
  });
  if (worst) {
    const missed = areas.filter(
      (area) => isCounted(area) && area.name !== worst && pastOf(area.name).length > 0 && !others.has(area.name),
    );
    expect(missed).toEqual([]);
  }
  const uncounted = new Set<string>();
  claim(/((?:\w+(?:, | and )?)+) (?:is|are) not counted\.$/, (list) => {
    for (const name of list.split(/, | and /)) uncounted.add(name);
  });
  if (!/^No area has a census/.test(text)) {
    expect([...uncounted].sort()).toEqual(
      areas
        .filter((area) => !isCounted(area))
        .map((area) => area.name)
        .sort(),
    );
  }
  return left;
}

describe('outlookSentence', () => {
  it('says nothing but the figures over 1,000 made-up outlooks', () => {
    const seen = new Set<string>();
    for (let seed = 1; seed <= 1000; seed += 1) {
      const made = makeCase(seed);
      const sentence = outlookSentence(made);
      const lede = sentence.lede.map((part) => part.text).join('');
      const counted = made.areas.filter((area) => area.censusTakenAt !== null);
      const oldest = Math.max(0, ...counted.map((area) => made.now - (area.censusTakenAt ?? 0)));
      let text = `${sentence.headline} ${lede}`;
      if (counted.length === 0) {
        expect(sentence.headline).toBe('No area has a census. Enter one before you act.');
        expect(sentence.worstAreaId).toBeNull();
        seen.add('no census');
        continue;
      }
      const stale =
        /^The census(?: of (\w+)( areas)?)? is (?:up to )?(?:(\d+) hours|(\d+) h (\d+) min) old\. Enter it before you act\. /.exec(
          text,
        );
      expect(stale !== null, text).toBe(oldest > staleCensusSeconds);
      if (stale) {
        const minutes = stale[3] === undefined ? Number(stale[4]) * 60 + Number(stale[5]) : Number(stale[3]) * 60;
        expect(minutes).toBe(Math.floor(oldest / 60));
        text = text.slice(stale[0].length);
        seen.add('stale');
      }
      const left = checkClaims(text, made);
      expect(left.trim(), `seed ${String(seed)}: ${text}`).toBe('');
      seen.add(
        sentence.worstAreaId === null ? 'quiet' : (/very likely|unlikely|likely|possible|remote/.exec(text)?.[0] ?? ''),
      );
    }
    expect([...seen].sort()).toEqual(
      ['likely', 'no census', 'possible', 'quiet', 'remote', 'stale', 'unlikely', 'very likely'].sort(),
    );
  });

  const zone = makeZone('Europe/London');
  const now = Date.UTC(2026, 11, 1, 19, 2) / 1000;
  const hours = Array.from({ length: 30 }, (_, hour) => Date.UTC(2026, 11, 1, 20) / 1000 + hour * 3600);
  const night = [{ from: Date.UTC(2026, 11, 1, 21) / 1000, to: Date.UTC(2026, 11, 2, 7, 30) / 1000 }];
  const area = (change: Partial<SentenceArea> = {}): SentenceArea => ({
    areaId: 'acute',
    name: 'Acute',
    spaceKind: 'bed',
    spaces: 24,
    alertLimit: 0.25,
    censusTakenAt: now - 1320,
    ...change,
  });
  const figures = (chances: number[], change: Partial<SentenceFigures> = {}): SentenceFigures => {
    const cells = hours.map((_, index) => ({ chance: chances[index] ?? 0, se: 0 }));
    return {
      areaId: 'acute',
      counted: true,
      shifts: night,
      shortfall: cells,
      shortfallWithin: cells,
      bedsToAdd: hours.map(() => 0),
      bedsThatDoNotExist: hours.map(() => 0),
      boardingOut: null,
      ...change,
    };
  };
  const say = (areas: SentenceArea[], outlooks: SentenceFigures[]) => {
    const sentence = outlookSentence({ result: { hours, areas: outlooks }, areas, now, zone });
    return { ...sentence, lede: sentence.lede.map((part) => part.text).join('') };
  };

  it('says which area, from when, what brings it under, what exists, and the boarding patients instead', () => {
    const said = say(
      [area()],
      [
        figures([0.23, 0.64, 0.57, 0.49, 0.36, 0.1], {
          bedsToAdd: hours.map((_, index) => [0, 5, 4, 3, 2][index] ?? 0),
          bedsThatDoNotExist: hours.map((_, index) => [0, 1][index] ?? 0),
          boardingOut: { patients: 4, by: Date.UTC(2026, 11, 1, 20, 30) / 1000 },
        }),
      ],
    );
    expect(said.headline).toBe('Acute is likely to run short from 21:00.');
    expect(said.lede).toBe(
      'Five more staffed beds from 21:00, easing to two by 00:00, bring every hour to the 25 % limit or under. ' +
        'At 21:00 one of the five does not exist as a bed space. ' +
        'Or four boarding patients out by 20:30, for the hours of that shift.',
    );
    expect(said.worstAreaId).toBe('acute');
  });

  it('takes the word from the printed figure: 49.5 % prints 50 % and is likely, 49.4 % is possible', () => {
    expect(say([area()], [figures([0.495])]).headline).toBe('Acute is likely to run short at 20:00.');
    expect(say([area()], [figures([0.494])]).headline).toBe('A shortfall in Acute is possible at 20:00.');
  });

  it('is quiet without being empty, and never prints 0 %', () => {
    const said = say([area()], [figures([0.001])]);
    expect(said.headline).toBe('No area passes its limit up to 07:00.');
    expect(said.lede).toBe('The highest chance of a shortfall is <1 %, remote: Acute at 20:00.');
    expect(said.worstAreaId).toBeNull();
  });

  it('names a later hour past the limit with its day', () => {
    const chances = hours.map((_, index) => (index === 25 ? 0.59 : 0.01));
    expect(say([area()], [figures(chances)]).lede).toContain(
      'After that, Acute passes its limit at 21:00 on Wednesday (59 %).',
    );
  });

  it('says so when its hours have all passed', () => {
    const later = hours[hours.length - 1] + 60;
    const sentence = outlookSentence({ result: { hours, areas: [figures([0.6])] }, areas: [area()], now: later, zone });
    expect(sentence.headline).toBe('This outlook has run out.');
  });

  it('speaks of the next night when no full hour of this one is left', () => {
    const morning = Date.UTC(2026, 11, 2, 7, 10) / 1000;
    const chances = hours.map((_, index) => (index === 25 ? 0.59 : 0.01));
    const sentence = outlookSentence({
      result: {
        hours,
        areas: [figures(chances, { shifts: [...night, { from: night[0].from + 86_400, to: night[0].to + 86_400 }] })],
      },
      areas: [area({ censusTakenAt: morning - 60 })],
      now: morning,
      zone,
    });
    expect(sentence.headline).toBe('Acute is likely to run short at 21:00.');
  });

  it('never lets an area without a census look calm', () => {
    const areas = [area(), area({ areaId: 'obs', name: 'Observation', censusTakenAt: null })];
    const said = say(areas, [figures([0.1]), figures([0.9], { areaId: 'obs', counted: false })]);
    expect(said.headline).toBe('No counted area passes its limit up to 07:00.');
    expect(said.lede).toContain('Observation is not counted.');
  });

  it('speaks of the census itself once it is over four hours old', () => {
    const said = say([area({ censusTakenAt: now - 18_720 })], [figures([0.6])]);
    expect(said.headline).toBe('The census is 5 h 12 min old. Enter it before you act.');
    expect(said.lede).toContain('Acute is likely to run short at 20:00.');
    expect(say([area({ censusTakenAt: now - staleCensusSeconds })], [figures([0.6])]).headline).not.toContain('old');
  });
});

describe('endOfTonight', () => {
  const zone = makeZone('Europe/London');
  const at = (day: number, hour: number, minute = 0) => Date.UTC(2026, 11, day, hour, minute) / 1000;
  const shifts = [
    { from: at(1, 14), to: at(1, 21, 30) },
    { from: at(1, 21), to: at(2, 7, 30) },
    { from: at(2, 7), to: at(2, 14, 30) },
    { from: at(2, 21), to: at(3, 7, 30) },
  ];
  it('is the end of the shift that crosses midnight, the running one at two in the morning', () => {
    expect(endOfTonight(shifts, at(1, 19), zone)).toBe(at(2, 7, 30));
    expect(endOfTonight(shifts, at(2, 2), zone)).toBe(at(2, 7, 30));
    expect(endOfTonight(shifts, at(2, 8), zone)).toBe(at(3, 7, 30));
  });
  it('is the next night once less than three hours are left of this one', () => {
    expect(endOfTonight(shifts, at(2, 4, 30), zone)).toBe(at(2, 7, 30));
    expect(endOfTonight(shifts, at(2, 4, 31), zone)).toBe(at(3, 7, 30));
  });
  it('is the next 08:00 where no shift crosses midnight', () => {
    expect(endOfTonight([], at(1, 19), zone)).toBe(at(2, 8));
    expect(endOfTonight([], at(2, 2), zone)).toBe(at(2, 8));
    expect(endOfTonight([], at(2, 7), zone)).toBe(at(3, 8));
  });
});
