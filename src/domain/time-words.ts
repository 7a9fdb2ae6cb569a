/* Instants in words, in the workshop's zone. Times are kept in UTC and shown as the workshop's clock has them. */

// Making a format takes milliseconds, and a screen that waits for a finger shows several times of day.
const formats = new Map<string, Intl.DateTimeFormat>();

function format(at: string | number, zone: string, parts: Intl.DateTimeFormatOptions): string {
  const name = `${zone} ${Object.entries(parts).join()}`;
  const known = formats.get(name) ?? new Intl.DateTimeFormat('en-GB', { timeZone: zone, ...parts });
  formats.set(name, known);
  return known.format(new Date(at));
}

/** The time of day of an instant in the workshop's zone, as "10:42". */
export function clockTime(at: string | number, zone: string): string {
  return format(at, zone, { hour: '2-digit', minute: '2-digit' });
}

/** The time of day with its seconds, as "10:42:05". */
export function clockSeconds(at: string | number, zone: string): string {
  return format(at, zone, { hour: '2-digit', minute: '2-digit', second: '2-digit' });
}

/** Day and time of an instant in the workshop's zone, as "6 Oct, 10:42". */
export function dayAndTime(at: string | number, zone: string): string {
  return `${shortDay(at, zone)}, ${clockTime(at, zone)}`;
}

/** Day with its year and time of an instant in the workshop's zone, as "6 Oct 2026, 10:42". */
export function dateAndTime(at: string | number, zone: string): string {
  return `${format(at, zone, { day: 'numeric', month: 'short', year: 'numeric' })}, ${clockTime(at, zone)}`;
}

/** The day of an instant in the workshop's zone without its year, as "6 Oct". */
export function shortDay(at: string | number, zone: string): string {
  return format(at, zone, { day: 'numeric', month: 'short' });
}

/** The day of an instant in the workshop's zone, as "Tue 6 Oct 2026". */
export function dayOf(at: string | number, zone: string): string {
  return format(at, zone, { weekday: 'short', day: 'numeric', month: 'short', year: 'numeric' }).replace(
    ',',
    '',
  );
}

/** A calendar day `YYYY-MM-DD` in words, as "14 Mar 2027"; anything else as it stands. */
export function dayWords(day: string): string {
  const instant = new Date(`${day}T00:00:00Z`);
  if (Number.isNaN(instant.getTime())) return day;
  return format(instant.getTime(), 'UTC', { day: 'numeric', month: 'short', year: 'numeric' });
}

const dayFormats = new Map<string, Intl.DateTimeFormat>();

/** The calendar day of an instant in the workshop's zone, `YYYY-MM-DD`, also where a clock is ages off. */
export function dayIn(zone: string, at: string): string {
  let format = dayFormats.get(zone);
  if (!format) {
    // Making one takes longer than all else that is asked of an entry.
    format = new Intl.DateTimeFormat('en-CA', {
      timeZone: zone,
      year: 'numeric',
      month: '2-digit',
      day: '2-digit',
    });
    dayFormats.set(zone, format);
  }
  const day = format.format(new Date(at));
  const yearDigits = day.indexOf('-');
  if (yearDigits === 4) return day;
  return yearDigits > 4 ? '9999-12-31' : day.padStart('YYYY-MM-DD'.length, '0');
}
