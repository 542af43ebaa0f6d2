/** The day of an instant in the studio's zone: '1 Dec 2026'. */
export function formatDay(instant: number, timeZone: string): string {
  return new Intl.DateTimeFormat('en-GB', {
    day: 'numeric',
    month: 'short',
    year: 'numeric',
    timeZone
  }).format(instant);
}
