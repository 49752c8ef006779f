import { afterEach, describe, expect, it } from 'vitest';
import { claimTab } from '../../../src/lib/tab-owner.ts';

afterEach(() => sessionStorage.clear());

describe('claimTab', () => {
  it('keeps what the same person typed, and forgets it for another', () => {
    claimTab('ines');
    sessionStorage.setItem('census-draft:general', 'figures');
    claimTab('ines');
    expect(sessionStorage.getItem('census-draft:general')).toBe('figures');
    claimTab('dilip');
    expect(sessionStorage.getItem('census-draft:general')).toBeNull();
  });
});
