import { describe, expect, it } from 'vitest';
import {
  formatAge,
  formatCount,
  formatDateTime,
  formatDay,
  formatHour,
  formatList,
  formatNumber,
  formatSigned,
  formatTime,
} from '../../../src/lib/format.ts';

const utc = (...parts: [number, number, number, number?, number?]) => Date.UTC(...parts) / 1000;

describe('times at the site', () => {
  it('are the wall clock of the site, 24 h, whatever zone this machine is in', () => {
    const at = utc(2026, 6, 1, 20, 5);
    expect(formatTime(at, 'Europe/London')).toBe('21:05');
    expect(formatHour(at, 'Asia/Kolkata')).toBe('01');
    expect(formatDay(at, 'Asia/Kolkata')).toBe('Thursday 2 July');
    expect(formatDay(at, 'Europe/London', 'short')).toBe('Wed 1 Jul');
    expect(formatDateTime(at, 'Australia/Lord_Howe')).toBe('2 Jul 2026, 06:35');
  });
});

describe('formatAge', () => {
  it.each([
    [0, 'under a minute'],
    [60, '1 minute'],
    [22 * 60 + 59, '22 minutes'],
    [3600, '1 hour'],
    [4 * 3600 + 20 * 60, '4 h 20 min'],
    [47 * 3600, '47 hours'],
    [11.9 * 86_400, '11 days'],
  ])('%d s is %s: rounded down, an age is never said to be more than it is', (seconds, words) => {
    expect(formatAge(seconds)).toBe(words);
  });
});

describe('numbers', () => {
  it('are grouped, signed and agree with their noun', () => {
    expect(formatNumber(1_260_400)).toBe('1,260,400');
    expect(formatNumber(1234.567, 2)).toBe('1,234.57');
    expect(formatNumber(-0.4)).toBe('0');
    expect(formatSigned(3)).toBe('+3');
    expect(formatSigned(0)).toBe('0');
    expect(formatSigned(-2)).toBe('−2');
    expect(formatCount(1, 'bed')).toBe('1 bed');
    expect(formatCount(5, 'bed')).toBe('5 beds');
    expect(formatList(['Acute', 'Ambulatory', 'Children'])).toBe('Acute, Ambulatory and Children');
    expect(formatList(['Acute'])).toBe('Acute');
  });
});
