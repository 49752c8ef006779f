/** Parameter checks: each throws a RangeError that names the culprit and gives its value. */

export function checkProbability(name: string, value: number): void {
  if (!(value >= 0 && value <= 1)) throw new RangeError(`${name} must lie in 0..1, got ${value}`);
}

export function checkNonNegative(name: string, value: number): void {
  if (!(value >= 0 && value < Infinity)) throw new RangeError(`${name} must be finite and not negative, got ${value}`);
}

export function checkPositive(name: string, value: number): void {
  if (!(value > 0 && value < Infinity)) throw new RangeError(`${name} must be finite and above 0, got ${value}`);
}

export function checkCount(name: string, value: number): void {
  if (!(value >= 0 && Number.isSafeInteger(value))) {
    throw new RangeError(`${name} must be a whole number, 0 or more, got ${value}`);
  }
}

export function checkPositiveCount(name: string, value: number): void {
  if (!(value >= 1 && Number.isSafeInteger(value))) {
    throw new RangeError(`${name} must be a whole number, 1 or more, got ${value}`);
  }
}

/** A level of confidence: strictly between 0 and 1. */
export function checkLevel(name: string, value: number): void {
  if (!(value > 0 && value < 1)) throw new RangeError(`${name} must lie strictly between 0 and 1, got ${value}`);
}
