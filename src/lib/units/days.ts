/*
 * Days are plain text (2026-05-31) in the studio's zone; instants are UTC milliseconds, shown in the studio's zone.
 */

/** `31 May 2026`. */
export function formatDay(day: string): string {
  const [year, month, date] = day.split('-').map(Number);
  return new Intl.DateTimeFormat('en-GB', { dateStyle: 'medium', timeZone: 'UTC' }).format(
    Date.UTC(year!, month! - 1, date)
  );
}

/** `31 May 2026, 14:02`. */
export function formatInstant(instant: number, timeZone: string): string {
  return new Intl.DateTimeFormat('en-GB', { dateStyle: 'medium', timeStyle: 'short', timeZone }).format(
    instant
  );
}

/** The day that it is in a zone at an instant. */
export function dayAt(instant: number, timeZone: string): string {
  const parts = new Intl.DateTimeFormat('en-GB', {
    year: 'numeric',
    month: '2-digit',
    day: '2-digit',
    timeZone
  }).formatToParts(instant);
  const part = (type: string) => parts.find((one) => one.type === type)!.value;
  return `${part('year')}-${part('month')}-${part('day')}`;
}

/** Whole days from one day to another; negative when `to` is earlier. */
export function daysBetween(from: string, to: string): number {
  return Math.round((Date.parse(`${to}T00:00:00Z`) - Date.parse(`${from}T00:00:00Z`)) / 86_400_000);
}
