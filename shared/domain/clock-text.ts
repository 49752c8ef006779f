/** A minute of the day as "07:30". */
export function clockText(minuteOfDay: number): string {
  const two = (value: number) => String(value).padStart(2, '0');
  return `${two(Math.floor(minuteOfDay / 60))}:${two(minuteOfDay % 60)}`;
}

/** The minute of the day that "7:30" or "07:30" means; null for anything else. */
export function readClock(text: string): number | null {
  const match = /^(\d{1,2}):(\d{2})$/.exec(text.trim());
  if (!match) return null;
  const [hour, minute] = [Number(match[1]), Number(match[2])];
  return hour < 24 && minute < 60 ? hour * 60 + minute : null;
}

const weekdays = ['Monday', 'Tuesday', 'Wednesday', 'Thursday', 'Friday', 'Saturday', 'Sunday'];

/** A half hour of week as "Monday 07:30". */
export function halfHourName(halfHour: number): string {
  return `${weekdays[Math.floor(halfHour / 48) % 7]} ${clockText((halfHour % 48) * 30)}`;
}
