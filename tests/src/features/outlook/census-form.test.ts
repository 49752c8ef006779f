import { describe, expect, it } from 'vitest';
import { censusBody } from '../../../../shared/api/censuses.ts';
import { censusBodyOf, censusFormOf, censusResolver } from '../../../../src/features/outlook/census-form.ts';
import type { CensusForm } from '../../../../src/features/outlook/census-form.ts';

const takenAt = 1_796_000_000;
const base = censusFormOf(['resus', 'acute', 'obs'], {
  areas: [
    { areaId: 'resus', takenAt, present: 3, waiting: 0, boarding: 1, enteredBy: 'A. Brandt' },
    { areaId: 'acute', takenAt, present: 22, waiting: 3, boarding: 6, enteredBy: 'A. Brandt' },
  ],
  undecided: { takenAt, waiting: 2, ambulancesHolding: 1 },
  arrivalsSinceMidnight: null,
});
const edit = (
  index: number,
  change: Partial<CensusForm['areas'][number]>,
  rest: Partial<CensusForm> = {},
): CensusForm => ({
  ...base,
  ...rest,
  areas: base.areas.with(index, { ...base.areas[index], ...change }),
});
const check = async (values: CensusForm) =>
  (await censusResolver(values, { base, now: () => takenAt + 60 }, { fields: {}, shouldUseNativeValidation: false }))
    .errors;

describe('censusFormOf', () => {
  it('leaves an area that was never counted empty, not zero', () => {
    expect(base.areas[2]).toEqual({ areaId: 'obs', present: '', waiting: '', boarding: '' });
    expect(base.areas[0].waiting).toBe('0');
    expect(base.arrivalsSinceMidnight).toBe('');
  });
});

describe('censusBodyOf', () => {
  it('sends only what was edited, so that nobody re-dates a count that is not theirs', () => {
    const body = censusBodyOf(edit(1, { waiting: '5' }), base, takenAt);
    expect(body.areas).toEqual([{ areaId: 'acute', present: 22, waiting: 5, boarding: 6 }]);
    expect(body).toMatchObject({ undecidedWaiting: null, ambulancesHolding: null, arrivalsSinceMidnight: null });
    expect(censusBody.safeParse(body).success).toBe(true);
  });
  it('counts every counted area again when nothing changed', () => {
    const body = censusBodyOf(base, base, takenAt, true);
    expect(body.areas.map((area) => area.areaId)).toEqual(['resus', 'acute']);
    expect(body.undecidedWaiting).toBe(2);
    expect(censusBody.safeParse(body).success).toBe(true);
  });
});

describe('censusResolver', () => {
  it('passes what is well entered', async () => {
    expect(await check(edit(1, { waiting: '5' }))).toEqual({});
    expect(await check(base)).toEqual({});
  });
  it.each([
    ['-1', 'Not below 0'],
    ['2.5', 'Whole numbers only'],
    ['4000', 'At most 2000'],
    ['three', 'Numbers only'],
    ['', 'Enter a number; 0 if there is nobody'],
  ])('says of "%s" beside its field: %s', async (waiting, message) => {
    expect((await check(edit(1, { waiting }))).areas?.[1]?.waiting?.message).toBe(message);
  });
  it('says that waiting and boarding together cannot exceed present', async () => {
    expect((await check(edit(1, { waiting: '17' }))).areas?.[1]?.present?.message).toBe(
      'Waiting and boarding together cannot exceed present',
    );
  });
  it('asks for the missing figures of an area counted for the first time', async () => {
    const errors = await check(edit(2, { present: '4' }));
    expect(errors.areas?.[2]?.waiting?.message).toBe('Enter a number; 0 if there is nobody');
    expect(errors.areas?.[2]?.boarding?.message).toBe('Enter a number; 0 if there is nobody');
  });
  it('keeps ambulances that hold among the waiting', async () => {
    expect((await check({ ...base, ambulancesHolding: '3' })).ambulancesHolding?.message).toBe(
      'At most as many as are waiting',
    );
    expect((await check({ ...base, undecidedWaiting: '' })).undecidedWaiting?.message).toBe(
      'Count the ambulances that hold among the waiting',
    );
  });
});
