// Times and durations in words. Times of day are shown in the time zone of the screen, 24 hours.

const two = (value: number): string => String(value).padStart(2, '0');

export function clockText(ms: number, withSeconds = false): string {
  const at = new Date(ms);
  const text = `${two(at.getHours())}:${two(at.getMinutes())}`;
  return withSeconds ? `${text}:${two(at.getSeconds())}` : text;
}

export function dayText(ms: number): string {
  const at = new Date(ms);
  return `${at.getFullYear()}-${two(at.getMonth() + 1)}-${two(at.getDate())}`;
}

export const dayClockText = (ms: number): string => `${dayText(ms)} ${clockText(ms)}`;

// "14:32", or with the day in front when that is not the day of `nowMs`.
export const momentText = (ms: number, nowMs: number): string =>
  (dayText(ms) === dayText(nowMs) ? clockText(ms) : dayClockText(ms));

export function minutesText(minutes: number): string {
  const whole = Math.max(0, Math.round(minutes));
  if (whole < 60) return `${whole} min`;
  const hours = Math.floor(whole / 60);
  return whole % 60 === 0 ? `${hours} h` : `${hours} h ${two(whole % 60)} min`;
}

// How old a reading is: seconds below two minutes, then minutes and hours.
export function ageText(seconds: number): string {
  const whole = Math.max(0, Math.floor(seconds));
  return whole < 120 ? `${whole} s` : minutesText(Math.floor(whole / 60));
}

// Value for <input type="datetime-local">, in the screen's time zone, whole minutes; and back to UTC.
export const localInput = (ms: number): string => `${dayText(ms)}T${clockText(ms)}`;
export function utcFromLocalInput(text: string): string | null {
  const ms = new Date(text).getTime();
  return Number.isFinite(ms) ? utcText(ms) : null;
}
// RFC 3339 in UTC, whole seconds.
export const utcText = (ms: number): string => `${new Date(ms).toISOString().slice(0, 19)}Z`;
