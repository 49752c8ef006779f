/** The parts that a site's settings are saved in, each as a whole. */
export const settingSections = ['rules', 'shifts', 'areas', 'calendar', 'on-call'] as const;
export type SettingSection = (typeof settingSections)[number];

/** What each part is called on screen. */
export const settingSectionNames: Record<SettingSection, string> = {
  rules: 'Planning rules',
  shifts: 'Shifts and handovers',
  areas: 'Care areas',
  calendar: 'Calendar',
  'on-call': 'On-call address',
};

/** Days that one entry may add to the calendar at once. */
export const calendarDaysAtOnce = 62;
/** The furthest that a stated effect may lie from an ordinary day, as factors of arrivals. */
export const statedEffectRange: readonly [low: number, high: number] = [0.1, 5];
