import { expect } from 'vitest';

/** Asserts |actual − expected| ≤ tolerance × |expected|, naming the case. */
export function expectRelative(actual: number, expected: number, tolerance: number, label: string): void {
  const error = expected === 0 ? Math.abs(actual) : Math.abs(actual / expected - 1);
  expect(error, `${label}: got ${actual}, expected ${expected}`).toBeLessThanOrEqual(tolerance);
}

/** Asserts |actual − expected| ≤ tolerance, naming the case. */
export function expectWithin(actual: number, expected: number, tolerance: number, label: string): void {
  expect(Math.abs(actual - expected), `${label}: got ${actual}, expected ${expected}`).toBeLessThanOrEqual(tolerance);
}
