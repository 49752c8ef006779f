import { describe, expect, it } from 'vitest';
import { safeReturnTo } from '../../../src/pages/SignInPage.tsx';

describe('safeReturnTo', () => {
  it('comes back to a page of the product', () => {
    expect(safeReturnTo('/sites/general/tonight?at=3')).toBe('/sites/general/tonight?at=3');
  });
  it.each([
    null,
    '',
    'https://elsewhere.example/',
    '//elsewhere.example/',
    '/\\elsewhere.example',
    'javascript:alert(1)',
    'sites/general',
  ])('goes to the first page instead of %s', (given) => {
    expect(safeReturnTo(given)).toBe('/');
  });
});
