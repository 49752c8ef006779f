import { admittedStream, boardingStream, streamsPerArea } from './stay-model.ts';
import { exponentialLayers } from './quick-stream.ts';
import type { QuickStream } from './quick-stream.ts';

/**
 * The patients' loops and the memory they work in, one set a thread. Measured with V8 11: an array that a function is
 * handed is checked again at every access (its kind, where its memory is, how long it is: eight instructions), while
 * one that is a constant of the function's own module is an address in the machine code. Loops over hundreds of patients a
 * replication are three times as fast for it. Hence arrays of fixed size, of which only what a plan needs is ever touched
 * (untouched pages cost no memory), and one simulation at a time in a thread, which is how simulations run anyway.
 */
const most = { areas: 100, segments: 1280, bins: 6912, lawEntries: 1 << 17, atOnce: 128 };
const streams = most.areas * streamsPerArea;

/** Three words a patient: when (all), which stream (all), how long (all). */
const words = new Uint32Array(3 * most.atOnce + 1);
/** Segment of arrival, share of it gone by, and stream within the area. */
const segment = new Int32Array(most.atOnce);
const share = new Float64Array(most.atOnce);
const inArea = new Int32Array(most.atOnce);
/** Layers of the ziggurat for exponentials: see `QuickStream`. */
const layerWidth = exponentialLayers.width.slice();
const layerInside = exponentialLayers.inside.slice();
/** Stay as a cumulative hazard, and for the admitted of a plan with staged areas that of their boarding. */
const stay = new Float64Array(most.atOnce);
const boardingStay = new Float64Array(most.atOnce);
/** Who of the batch is admitted. */
const admittedAt = new Int32Array(most.atOnce);

/** Ends of the stays, bins since the start; at least `bins` for one that outlasts the horizon; and the segment each lies in. */
const until = new Float64Array(most.atOnce);
const untilSegment = new Int32Array(most.atOnce);

/** Expected arrivals of an area up to each segment, and the segment that each 64th of them begins in. */
const arrived = new Float64Array(most.segments + 1);
const guide = new Uint16Array(64);
const segmentBin = new Float64Array(most.segments + 1);
const segmentBins = new Float64Array(most.segments + 1);
const shareBlock = new Uint8Array(most.segments);
const hourOfBin = new Uint16Array(most.bins + 1);
const shareSteps = new Float64Array(most.areas * 24 * 3);
const spent = new Float64Array(streams * (most.segments + 2));
const moves = new Int32Array((most.areas + 1) * (most.bins + 1));
const admittedIn = new Int32Array(most.areas * 512);
const admittedOut = new Int32Array(most.areas * 512);

/** Laws of stays of all streams, then of what remains of them for those present, one after the other: see `StayTables`. */
const lawStays = new Float64Array(most.lawEntries);
const lawFrom = new Int32Array(2 * streams);
const lawLast = new Int32Array(2 * streams);
const lawPerHazard = new Float64Array(2 * streams);
const lawEnd = new Float64Array(2 * streams);
const lawTail = new Float64Array(2 * streams);
/** Factors on stays by stream that a change has. */
const stayFactor = new Float64Array(streams);

/** Highest and last need of every piece of the horizon, and where pieces end. */
const pieceEnd = new Int32Array(most.bins + 1);
const pieceMost = new Int32Array(most.bins);
const pieceLast = new Int32Array(most.bins);

/** The pieces' arrays for those who record: first bin and the end of each, highest and last need. */
export const pieces = { end: pieceEnd, most: pieceMost, last: pieceLast };

/** Patients whose words are drawn at once: few enough that they stay in the fastest memory. */
export const patientsAtOnce = most.atOnce;

/** Sizes of what is simulated. */
export interface LoopSizes {
  areas: number;
  segments: number;
  bins: number;
  hours: number;
  shareBlocks: number;
  lawEntries: number;
}

/** Views of the memory for a plan's sizes, emptied. @throws RangeError naming what is larger than the memory. */
export function takeLoopRoom({ areas, segments, bins, hours, shareBlocks, lawEntries }: LoopSizes) {
  for (const [name, size, limit] of [
    ['areas', areas, most.areas],
    ['segments', segments, most.segments],
    ['bins', bins, most.bins],
    ['hours', hours, 511],
    ['share blocks', shareBlocks, 24],
    ['entries of the laws of stays', lawEntries, most.lawEntries],
  ] as const) {
    if (size > limit) throw new RangeError(`a simulation may have ${limit} ${name} at most, got ${size}`);
  }
  const all = areas * streamsPerArea;
  const room = {
    segmentBin: segmentBin.subarray(0, segments + 1),
    segmentBins: segmentBins.subarray(0, segments + 1),
    shareBlock: shareBlock.subarray(0, segments),
    hourOfBin: hourOfBin.subarray(0, bins + 1),
    shareSteps: shareSteps.subarray(0, areas * shareBlocks * 3),
    spent: spent.subarray(0, all * (segments + 2)),
    moves: moves.subarray(0, (areas + 1) * (bins + 1)),
    admittedIn: admittedIn.subarray(0, areas * (hours + 1)),
    admittedOut: admittedOut.subarray(0, areas * (hours + 1)),
    laws: {
      stays: lawStays.subarray(0, lawEntries),
      from: lawFrom.subarray(0, 2 * all),
      last: lawLast.subarray(0, 2 * all),
      perHazard: lawPerHazard.subarray(0, 2 * all),
      end: lawEnd.subarray(0, 2 * all),
      tail: lawTail.subarray(0, 2 * all),
    },
    stayFactor: stayFactor.subarray(0, all),
    batch: { segment, share, inArea, stay, boardingStay, until },
  };
  room.spent.fill(0);
  return room;
}

/** Adds up an area's expected arrivals by segment and notes where each 64th of them begins. @returns their sum. */
export function cumulateRates(rate: ArrayLike<number>, firstSegment: number, segments: number): number {
  const itsArrived = arrived;
  const itsGuide = guide;
  const itsSegmentBins = segmentBins;
  let total = 0;
  for (let k = firstSegment; k < segments; k += 1) {
    itsArrived[k] = total;
    total += rate[k] * itsSegmentBins[k];
  }
  itsArrived[segments] = total;
  if (!(total > 0)) return 0;
  const part = total / 64;
  let k = firstSegment;
  for (let j = 0; j < 64; j += 1) {
    while (itsArrived[k + 1] <= j * part) k += 1;
    itsGuide[j] = k;
  }
  return total;
}

/** Words of a stream into `words`: xoshiro128** with its state in registers, as in `QuickStream`. */
function makeWords(stream: QuickStream, count: number): void {
  const itsWords = words;
  let { a, b, c, d } = stream;
  for (let i = 0; i < count; i += 1) {
    const scrambled = Math.imul(b, 5);
    itsWords[i] = Math.imul((scrambled << 7) | (scrambled >>> 25), 9);
    const shifted = b << 9;
    c ^= a;
    d ^= b;
    b ^= c;
    a ^= d;
    c ^= shifted;
    d = (d << 11) | (d >>> 21);
  }
  stream.a = a;
  stream.b = b;
  stream.c = c;
  stream.d = d;
  stream.skipBlock();
}

/** Exponentials from words[from + i] into `stay`: the few that fall outside the layers take more words of the stream. */
function makeExponentials(stream: QuickStream, from: number, count: number): void {
  const itsWords = words;
  const itsStay = stay;
  const itsWidth = layerWidth;
  const itsInside = layerInside;
  let outside = 0;
  for (let i = 0; i < count; i += 1) {
    const word = itsWords[from + i];
    const layer = word & 255;
    const step = word >>> 8;
    itsStay[i] = (step + 0.5) * itsWidth[layer];
    if (step >= itsInside[layer]) {
      itsStay[i] = -1;
      outside += 1;
    }
  }
  for (let i = 0; outside > 0; i += 1) {
    if (itsStay[i] >= 0) continue;
    itsStay[i] = stream.exponentialFrom(itsWords[from + i]);
    outside -= 1;
  }
}

/**
 * Draws a batch of an area's arrivals: times by inversion of the cumulative rate, streams by the shares of the block, and
 * stays as cumulative hazards. @param total what `cumulateRates` returned. @param stages the admitted need a boarding stay too.
 */
export function drawBatch(
  stream: QuickStream,
  count: number,
  total: number,
  firstShare: number,
  stages: boolean,
): void {
  const itsWords = words;
  const itsSegment = segment;
  const itsShare = share;
  const itsInArea = inArea;
  const itsArrived = arrived;
  const itsGuide = guide;
  const itsShareBlock = shareBlock;
  const itsSteps = shareSteps;
  makeWords(stream, 3 * count);
  const perWord = total * 2 ** -32;
  for (let i = 0; i < count; i += 1) {
    const when = itsWords[i];
    const before = (when + 0.5) * perWord;
    let k = itsGuide[when >>> 26];
    while (itsArrived[k + 1] <= before) k += 1;
    itsSegment[i] = k;
    itsShare[i] = (before - itsArrived[k]) / (itsArrived[k + 1] - itsArrived[k]);
    const u = itsWords[count + i] * 2 ** -32;
    const steps = firstShare + itsShareBlock[k] * 3;
    // Sums of comparisons: which stream it is cannot be foreseen, and a wrong guess of a branch costs more.
    itsInArea[i] = +(u >= itsSteps[steps]) + +(u >= itsSteps[steps + 1]) + +(u >= itsSteps[steps + 2]);
  }
  makeExponentials(stream, 2 * count, count);
  if (stages) drawBoarding(stream, count);
}

/** Draws the boarding of a batch's admitted: with the arrival, so that no change of a plan moves a later draw. */
function drawBoarding(stream: QuickStream, count: number): void {
  let admitted = 0;
  for (let i = 0; i < count; i += 1) {
    admittedAt[admitted] = i;
    admitted += +(inArea[i] === admittedStream);
  }
  makeWords(stream, admitted);
  for (let n = 0; n < admitted; n += 1) boardingStay[admittedAt[n]] = stream.exponentialFrom(words[n]);
}

/** Draws a batch of those present in an area at its start: streams by their cumulative chances, what remains as cumulative hazards. */
export function drawPresent(
  stream: QuickStream,
  count: number,
  steps: ArrayLike<number>,
  startSegment: number,
  stages: boolean,
): void {
  const itsWords = words;
  const itsSegment = segment;
  const itsShare = share;
  const itsInArea = inArea;
  makeWords(stream, 2 * count);
  const one = steps[0];
  const two = steps[1];
  const three = steps[2];
  const four = steps[3];
  for (let i = 0; i < count; i += 1) {
    const u = itsWords[i] * 2 ** -32;
    itsSegment[i] = startSegment;
    itsShare[i] = 0;
    itsInArea[i] = +(u >= one) + +(u >= two) + +(u >= three) + +(u >= four);
  }
  makeExponentials(stream, count, count);
  if (stages) drawBoarding(stream, count);
}

/**
 * Finds the ends of the batch's stays, in bins: `stayOf` and `departureOf` for all. They are left where a remedy may change
 * them before they are entered. @param firstLaw law of the area's first stream: newcomers' or of what remains.
 */
export function endStays(count: number, firstStream: number, firstLaw: number, row: number): void {
  const itsSegment = segment;
  const itsShare = share;
  const itsInArea = inArea;
  const itsStay = stay;
  const itsUntil = until;
  const itsUntilSegment = untilSegment;
  const itsStays = lawStays;
  const itsFrom = lawFrom;
  const itsLast = lawLast;
  const itsPerHazard = lawPerHazard;
  const itsEnd = lawEnd;
  const itsTail = lawTail;
  const itsFactor = stayFactor;
  const itsSpent = spent;
  const itsBin = segmentBin;
  const itsBins = segmentBins;
  for (let i = 0; i < count; i += 1) {
    const stream = itsInArea[i];
    const l = firstLaw + stream;
    const hazard = itsStay[i];
    const place = hazard * itsPerHazard[l];
    const last = itsLast[l];
    const law = itsFrom[l];
    let x: number;
    if (place >= last) {
      x = itsStays[law + last] + (hazard - itsEnd[l]) * itsTail[l];
    } else {
      const index = place | 0;
      const lower = itsStays[law + index];
      x = lower + (place - index) * (itsStays[law + index + 1] - lower);
    }
    const s = firstStream + stream;
    const base = s * row;
    let at = base + itsSegment[i];
    const from = itsSpent[at];
    const target = from + itsShare[i] * (itsSpent[at + 1] - from) + x * itsFactor[s];
    // Most stays last some segments: steps that are added rather than asked for are no wrong guesses.
    at += +(itsSpent[at + 1] <= target);
    at += +(itsSpent[at + 1] <= target);
    at += +(itsSpent[at + 1] <= target);
    at += +(itsSpent[at + 1] <= target);
    while (itsSpent[at + 1] <= target) at += 1;
    const before = itsSpent[at];
    const left = at - base;
    itsUntilSegment[i] = left;
    itsUntil[i] = itsBin[left] + ((target - before) / (itsSpent[at + 1] - before)) * itsBins[left];
  }
}

/**
 * Lets those of the batch who are decided before the horizon ends go on into boarding. They are put first, as patients of
 * the boarding stream whose stay begins at the decision: `endStays` for that many then finds when they leave. The order
 * within a batch means nothing. @returns how many they are.
 */
export function passIntoBoarding(count: number, bins: number): number {
  const itsSegment = segment;
  const itsShare = share;
  const itsInArea = inArea;
  const itsStay = stay;
  const itsBoarding = boardingStay;
  const itsUntil = until;
  const itsUntilSegment = untilSegment;
  const itsPassing = admittedAt;
  const itsBin = segmentBin;
  const itsBins = segmentBins;
  let passed = 0;
  for (let i = 0; i < count; i += 1) {
    itsPassing[passed] = i;
    passed += +(itsInArea[i] === admittedStream) & +(itsUntil[i] < bins);
  }
  for (let n = 0; n < passed; n += 1) {
    const i = itsPassing[n];
    const at = itsUntil[i];
    let k = itsUntilSegment[i];
    // Rounding may have put the end into the next.
    if (itsBin[k + 1] <= at) k += 1;
    itsInArea[i] = itsInArea[n];
    itsUntil[i] = itsUntil[n];
    itsUntilSegment[i] = itsUntilSegment[n];
    itsInArea[n] = boardingStream;
    itsSegment[n] = k;
    itsShare[n] = (at - itsBin[k]) / itsBins[k];
    itsStay[n] = itsBoarding[i];
  }
  return passed;
}

interface PostSizes {
  areas: number;
  bins: number;
  hours: number;
}

/** Enters the batch's arrivals in an area's row of moves and in the department's. */
export function postComing(count: number, a: number, { areas, bins, hours }: PostSizes): void {
  const itsSegment = segment;
  const itsShare = share;
  const itsInArea = inArea;
  const itsMoves = moves;
  const itsIn = admittedIn;
  const itsHour = hourOfBin;
  const itsBin = segmentBin;
  const itsBins = segmentBins;
  const admitted = admittedStream;
  const first = a * (bins + 1);
  const pooled = areas * (bins + 1);
  const firstHour = a * (hours + 1);
  for (let i = 0; i < count; i += 1) {
    const k = itsSegment[i];
    const bin = (itsBin[k] + itsShare[i] * itsBins[k]) | 0;
    itsMoves[first + bin] += 1;
    itsMoves[pooled + bin] += 1;
    // Added 0 or 1 rather than asked: a guess that is wrong a fifth of the time costs more.
    itsIn[firstHour + itsHour[bin]] += +(itsInArea[i] === admitted);
  }
}

/** Enters the batch's departures. Past the end of the horizon lies an entry that nobody reads. */
export function postLeaving(count: number, a: number, { areas, bins, hours }: PostSizes): void {
  const itsInArea = inArea;
  const itsUntil = until;
  const itsMoves = moves;
  const itsOut = admittedOut;
  const itsHour = hourOfBin;
  const admitted = admittedStream;
  const boarding = boardingStream;
  const first = a * (bins + 1);
  const pooled = areas * (bins + 1);
  const firstHour = a * (hours + 1);
  for (let i = 0; i < count; i += 1) {
    const bin = itsUntil[i] | 0;
    itsMoves[first + bin] -= 1;
    itsMoves[pooled + bin] -= 1;
    const stream = itsInArea[i];
    itsOut[firstHour + itsHour[bin]] += +(stream === admitted) | +(stream === boarding);
  }
}

/** Highest and last need of every piece (`pieceEnd`: first bin, then the end of each) from a row of moves. */
export function scanNeed(row: number, bins: number, pieces: number): void {
  const itsMoves = moves;
  const itsPieceEnd = pieceEnd;
  const itsPieceMost = pieceMost;
  const itsPieceLast = pieceLast;
  const first = row * (bins + 1);
  const from = first + itsPieceEnd[0];
  let n = 0;
  let at = first;
  for (; at < from; at += 1) n = (n + itsMoves[at]) | 0;
  for (let p = 0; p < pieces; p += 1) {
    const end = first + itsPieceEnd[p + 1];
    let highest = 0;
    // Four bins a turn: the loop itself would cost as much as what it does.
    for (const whole = end - 3; at < whole; at += 4) {
      const one = (n + itsMoves[at]) | 0;
      const two = (one + itsMoves[at + 1]) | 0;
      const three = (two + itsMoves[at + 2]) | 0;
      n = (three + itsMoves[at + 3]) | 0;
      const early = one > two ? one : two;
      const late = three > n ? three : n;
      const most = early > late ? early : late;
      if (most > highest) highest = most;
    }
    for (; at < end; at += 1) {
      n = (n + itsMoves[at]) | 0;
      if (n > highest) highest = n;
    }
    itsPieceMost[p] = highest;
    itsPieceLast[p] = n;
  }
}
