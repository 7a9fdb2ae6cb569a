/** The time of day of an instant in the workshop's zone, as "10:42". */
export function clockTime(at: string | number, zone: string): string {
  return new Intl.DateTimeFormat('en-GB', { timeZone: zone, hour: '2-digit', minute: '2-digit' }).format(
    new Date(at),
  );
}

/** Day and time of an instant in the workshop's zone, as "6 Oct, 10:42". */
export function dayAndTime(at: string | number, zone: string): string {
  const day = new Intl.DateTimeFormat('en-GB', { timeZone: zone, day: 'numeric', month: 'short' }).format(
    new Date(at),
  );
  return `${day}, ${clockTime(at, zone)}`;
}

/** A calendar day `YYYY-MM-DD` in words, as "14 Mar 2027". */
export function dayWords(day: string): string {
  const instant = new Date(`${day}T00:00:00Z`);
  return Number.isNaN(instant.getTime())
    ? day
    : new Intl.DateTimeFormat('en-GB', {
        timeZone: 'UTC',
        day: 'numeric',
        month: 'short',
        year: 'numeric',
      }).format(instant);
}
