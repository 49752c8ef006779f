import type { OutlookInput } from './outlook-types.ts';

function checkCount(name: string, value: number): void {
  if (!(Number.isInteger(value) && value >= 0 && value <= 2000)) {
    throw new RangeError(`${name} must be a whole number from 0 to 2,000, got ${value}`);
  }
}

function checkChance(name: string, value: number): void {
  if (!(value > 0 && value < 1)) throw new RangeError(`${name} must lie between 0 and 1, got ${value}`);
}

/**
 * Checks what an outlook is asked for. A census above the beds is no fault: need may exceed beds.
 * @throws RangeError naming the first culprit.
 */
export function checkOutlookInput(input: OutlookInput, modelAreas: number): void {
  const { issuedAt, hours, areas, shifts } = input;
  if (!Number.isFinite(issuedAt)) throw new RangeError(`issuedAt must be an instant, got ${issuedAt}`);
  if (hours.length === 0 || hours.length > 24 * 21) throw new RangeError(`hours must be 1..504, got ${hours.length}`);
  hours.forEach((at, i) => {
    if (!(at > (i === 0 ? issuedAt : hours[i - 1])))
      throw new RangeError(`hours[${i}] must come after what is before it`);
    if (at % 300 !== 0) throw new RangeError(`hours[${i}] must be a multiple of five minutes, got ${at}`);
  });
  if (areas.length === 0 || areas.length !== modelAreas) {
    throw new RangeError(`areas must be the model's ${modelAreas}, got ${areas.length}`);
  }
  areas.forEach((area, a) => {
    const { census } = area;
    if (census !== null) {
      checkCount(`areas[${a}].census.present`, census.present);
      checkCount(`areas[${a}].census.waiting`, census.waiting);
      checkCount(`areas[${a}].census.boarding`, census.boarding);
      if (census.waiting + census.boarding > census.present) {
        throw new RangeError(`areas[${a}].census: waiting and boarding together exceed present`);
      }
      if (!(census.takenAt <= issuedAt && census.takenAt > issuedAt - 86_400)) {
        throw new RangeError(`areas[${a}].census.takenAt must lie within the day before issuedAt`);
      }
    }
    if (area.staffedBeds.length === 0) throw new RangeError(`areas[${a}].staffedBeds must have a step`);
    area.staffedBeds.forEach((step, i) => {
      checkCount(`areas[${a}].staffedBeds[${i}].beds`, step.beds);
      if (!Number.isFinite(step.at) || (i > 0 && step.at <= area.staffedBeds[i - 1].at)) {
        throw new RangeError(`areas[${a}].staffedBeds[${i}].at must ascend, got ${step.at}`);
      }
    });
    if (area.staffedBeds[0].at > issuedAt) throw new RangeError(`areas[${a}].staffedBeds must begin by issuedAt`);
    checkCount(`areas[${a}].spaces`, area.spaces);
    checkCount(`areas[${a}].safeMinimum`, area.safeMinimum);
    if (!(Number.isInteger(area.bedStep) && area.bedStep >= 1 && area.bedStep <= 100)) {
      throw new RangeError(`areas[${a}].bedStep must be 1..100, got ${area.bedStep}`);
    }
    checkChance(`areas[${a}].alertLimit`, area.alertLimit);
  });
  if (input.undecided !== null) {
    checkCount('undecided.waiting', input.undecided.waiting);
    if (!(input.undecided.takenAt <= issuedAt && input.undecided.takenAt > issuedAt - 86_400)) {
      throw new RangeError('undecided.takenAt must lie within the day before issuedAt');
    }
  }
  checkChance('planningRisk', input.planningRisk);
  shifts.forEach((shift, s) => {
    if (!(shift.to > shift.from)) throw new RangeError(`shifts[${s}] must end after it starts`);
  });
  if (!Number.isSafeInteger(input.seed)) throw new RangeError(`seed must be a safe whole number, got ${input.seed}`);
  if (!(Number.isInteger(input.replications) && input.replications >= 1 && input.replications <= 1e6)) {
    throw new RangeError(`replications must be 1..1,000,000, got ${input.replications}`);
  }
}
