import { z } from 'zod';

/** Ids are random and opaque. */
export const id = z
  .string()
  .min(1)
  .max(64)
  .regex(/^[A-Za-z0-9_-]+$/);

/** An instant, UTC seconds. */
export const instant = z.int().min(0).max(4_102_444_800);

/** The same in an address, where everything is text. A week into 1970 at least: nights and shifts about it have instants too. */
export const queryInstant = z.coerce.number<number>().int().min(604_800).max(4_102_444_800);

export const siteParams = z.object({ siteId: id });

/** A note that a person types: short, and screened for anything that could identify a patient. */
export const note = z.string().trim().max(500);

/** RFC 9457. `faults` lists every fault of the input at once. */
export const problem = z.object({
  type: z.string(),
  title: z.string(),
  status: z.int(),
  detail: z.string(),
  /** What was kept, and what to do next. */
  kept: z.string().optional(),
  next: z.string().optional(),
  requestId: z.string().optional(),
  faults: z.array(z.object({ at: z.string(), message: z.string() })).optional(),
});
export type Problem = z.infer<typeof problem>;

/** Where a model's stays come from when it was fitted on hourly counts; null or absent: visits. Such a model knows no admissions. */
export const staysFrom = z.enum(['departures by hour', 'stated mean']).nullable().optional();
