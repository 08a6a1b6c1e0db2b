/** ISO 8601 calendar dates, with or without a time: what can be put in order. */
const ISO_8601 =
  /^(\d{4})-?(\d\d)(?:-?(\d\d)(?:[T ](\d\d)(?::?(\d\d)(?::?(\d\d)(?:[.,]\d+)?)?)?(?:Z|[+-](\d\d)(?::?(\d\d))?)?)?)?$/;

/**
 * Whether the text is an ISO 8601 date that the calendar has, with or without a time of day: not the 30th of February,
 * nor half past 25. A leap second (:60) and the end of a day (24:00) are times of day.
 */
export function isIsoTime(text: string): boolean {
  const match = ISO_8601.exec(text);
  if (match === null) return false;
  const part = (group: number, absent: number) => Number(match[group] ?? absent);
  const [year, month, day] = [part(1, 0), part(2, 1), part(3, 1)];
  if (month < 1 || month > 12 || day < 1 || day > daysIn(year, month)) return false;
  const [hour, minute, second] = [part(4, 0), part(5, 0), part(6, 0)];
  const isTime = (hour < 24 && minute < 60 && second <= 60) || (hour === 24 && minute === 0 && second === 0);
  return isTime && part(7, 0) < 24 && part(8, 0) < 60;
}

function daysIn(year: number, month: number): number {
  // Day 0 is the last of the month before. The year is set apart: the constructor takes 0 to 99 for 1900 to 1999.
  const date = new Date(0);
  date.setUTCFullYear(year, month, 0);
  return date.getUTCDate();
}
