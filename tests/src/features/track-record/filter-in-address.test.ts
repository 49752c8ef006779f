import { expect, test } from 'vitest';
import { filterOf, searchOf } from '../../../../src/features/track-record/filter-in-address.ts';

test('an empty address is the usual filter, and the usual filter an empty address', () => {
  const usual = filterOf(new URLSearchParams());
  expect(usual).toEqual({ measure: 'need', lead: 4, area: '', shift: '', model: '', weeks: 52 });
  expect(searchOf(usual).toString()).toBe('');
});

test('a filter survives the way through the address', () => {
  const filter = { measure: 'peak', lead: 12, area: 'acute', shift: 'Night', model: 'abc', weeks: 13 } as const;
  expect(filterOf(searchOf(filter))).toEqual(filter);
});

test('a part that is not one counts as not given; the others stand', () => {
  expect(filterOf(new URLSearchParams('weeks=12&lead=1000&measure=mood&shift=Late&other=1'))).toEqual({
    measure: 'need',
    lead: 4,
    area: '',
    shift: 'Late',
    model: '',
    weeks: 52,
  });
});
