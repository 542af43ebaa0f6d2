/** Today's plain date (2026-05-31) in a studio's zone. */
export function today(timeZone: string, now = Date.now()): string {
  return new Intl.DateTimeFormat('en-CA', {
    timeZone,
    year: 'numeric',
    month: '2-digit',
    day: '2-digit'
  }).format(now);
}
