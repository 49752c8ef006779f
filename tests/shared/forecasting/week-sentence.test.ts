import { describe, expect, it } from 'vitest';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import { byLastChance, weekGaps } from '../../../shared/forecasting/week-gaps.ts';
import { riskInWords, weekSentence } from '../../../shared/forecasting/week-sentence.ts';
import { buildWeek, gapOf, weekNow, weekShifts } from '../../support/build-week.ts';

const day = 86_400;
const areas = [
  { areaId: 'acute', name: 'Acute', spaceKind: 'bed' as const },
  { areaId: 'obs', name: 'Observation', spaceKind: 'chair' as const },
];
// Places of shifts: three a day from Tuesday's Early.
const tuesdayLate = 1;
const tuesdayNight = 2;
const fridayNight = 11;
const saturdayNight = 14;
const nextMondayLate = 19;

function say(gaps: Parameters<typeof buildWeek>[0], days = 7) {
  const { result } = buildWeek(gaps).outlook;
  return weekSentence({
    result,
    areas,
    now: weekNow,
    until: result.days[days].to,
    days,
    zone: makeZone('Europe/London'),
  });
}
const ledeOf = (sentence: ReturnType<typeof say>) => sentence.lede.map(({ text }) => text).join('');

describe('weekSentence', () => {
  it('names the worst gap that can still be booked, by when, and the next two', () => {
    const sentence = say({
      acute: { [saturdayNight]: gapOf(10, 0.69), [fridayNight]: gapOf(9, 0.63) },
      obs: { [nextMondayLate]: gapOf(2, 0.2) },
    });
    expect(sentence.headline).toBe('Saturday Night needs ten more Acute beds.');
    expect(ledeOf(sentence)).toBe(
      'Book by Fri 4 Dec, 21:00. At a 1 in 10 risk it needs them, and Friday Night nine more and Monday 7 Dec Late two more in Observation. ',
    );
    expect(sentence.worstAreaId).toBe('acute');
  });

  it('says that bed spaces do not exist, and how many gaps are past booking', () => {
    const sentence = say({
      acute: { [saturdayNight]: gapOf(6, 0.5, { bedsThatDoNotExist: 2 }), [tuesdayNight]: gapOf(8, 0.6) },
    });
    expect(sentence.headline).toBe('Saturday Night needs six more Acute beds.');
    expect(ledeOf(sentence)).toContain('For two of the six no bed spaces exist: beds alone will not do.');
    expect(ledeOf(sentence)).toContain('For one further gap the last chance to book has passed.');
    expect(ledeOf(sentence)).toContain('no other shift needs more than is planned');
  });

  it('says so where every gap is past booking', () => {
    const sentence = say({ obs: { [tuesdayLate]: gapOf(1, 0.3) } });
    expect(sentence.headline).toBe(
      'Tuesday Late is short of one Observation chair, and the last chance to book has passed.',
    );
  });

  it('without a gap says what the plan holds for and suggests no fewer beds', () => {
    const sentence = say({});
    expect(sentence.headline).toBe('The plan holds for the next seven days.');
    expect(ledeOf(sentence)).toBe('At a 1 in 10 risk of any shortfall in a shift, no area needs more than is planned.');
    expect(sentence.worstAreaId).toBeNull();
  });

  it('speaks only of the days shown, and not of the shift under way', () => {
    const gaps = { acute: { 0: gapOf(12, 0.9), [3 * 9]: gapOf(11, 0.9) } };
    expect(say(gaps).headline).toBe('The plan holds for the next seven days.');
    expect(say(gaps, 14).headline).toBe('Thursday 10 Dec Early needs eleven more Acute beds.');
  });
});

describe('weekGaps', () => {
  const { result } = buildWeek({
    acute: { [fridayNight]: gapOf(4, 0.3), [saturdayNight]: gapOf(4, 0.5), [tuesdayNight]: gapOf(2, 0.4) },
    obs: { [saturdayNight]: gapOf(6, 0.2, { lastChanceAt: weekNow + 60 }) },
  }).outlook;
  const names = (gaps: ReturnType<typeof weekGaps>) =>
    gaps.map(({ areaId, shift }) => `${areaId} ${String(weekShifts.findIndex(({ from }) => from === shift.from))}`);

  it('has the most beds first, then the highest chance', () => {
    expect(names(weekGaps(result, weekNow))).toEqual(['obs 14', 'acute 14', 'acute 11', 'acute 2']);
    expect(names(weekGaps(result, weekNow, weekNow + day))).toEqual(['acute 2']);
  });

  it('has by last chance those to come first, soonest first, and those passed last', () => {
    expect(names(byLastChance(weekGaps(result, weekNow), weekNow))).toEqual([
      'obs 14',
      'acute 11',
      'acute 14',
      'acute 2',
    ]);
  });
});

it('says a risk as it is spoken', () => {
  expect(riskInWords(0.1)).toBe('1 in 10');
  expect(riskInWords(0.05)).toBe('1 in 20');
  expect(riskInWords(0.15)).toBe('15 %');
});
