/** Spans of time on a screen: “13 h 31 min”, “4 ms”, and estimates with their spread. Seconds in, words out. */

/** @param seconds not negative; fractions are welcome */
export function spanInWords(seconds: number): string {
  if (seconds <= 0) return '0 s';
  if (seconds < 0.001) return 'under 1 ms';
  if (seconds < 0.9995) return `${Math.round(seconds * 1000)} ms`;
  if (seconds < 9.95) return `${seconds.toFixed(1)} s`;
  const whole = Math.round(seconds);
  if (whole < 60) return `${whole} s`;
  if (whole < 3600) return twoUnits(whole, 60, 'min', 1, 's');
  const minutes = Math.round(seconds / 60);
  if (minutes < 100 * 60) return twoUnits(minutes, 60, 'h', 1, 'min');
  return twoUnits(Math.round(seconds / 3600), 24, 'd', 1, 'h');
}

function twoUnits(value: number, size: number, large: string, step: number, small: string): string {
  const high = Math.floor(value / size);
  const low = (value % size) / step;
  return low === 0 ? `${high} ${large}` : `${high} ${large} ${low} ${small}`;
}

/** The same rounded as an estimate deserves: two leading figures at most. */
export function roughSpanInWords(seconds: number): string {
  const step =
    seconds < 10 ? 1 : seconds < 60 ? 5 : seconds < 600 ? 30 : seconds < 3600 ? 300 : seconds < 36_000 ? 600 : 3600;
  return seconds < 1 ? 'under 1 s' : spanInWords(Math.max(step, Math.round(seconds / step) * step));
}

export interface Spread {
  readonly low: number;
  readonly likely: number;
  readonly high: number;
}

/** “1 h 20 min to 4 h, 8 times in 10”. @param spread seconds */
export function spreadInWords(spread: Spread): string {
  const [low, high] = [roughSpanInWords(spread.low), roughSpanInWords(spread.high)];
  return low === high ? `${low}, 8 times in 10` : `${low} to ${high}, 8 times in 10`;
}

/** “Between 1 h 20 min and 4 h to go (8 times in 10), most likely about 2 h 10 min.” */
export function estimateSentence(spread: Spread): string {
  const [low, likely, high] = [spread.low, spread.likely, spread.high].map(roughSpanInWords);
  if (low === high) return `About ${likely} to go (8 times in 10).`;
  return `Between ${low} and ${high} to go (8 times in 10), most likely about ${likely}.`;
}

/** “3 s ago”, “2 min ago”, “4 d ago”. @param seconds how long it is past */
export function agoInWords(seconds: number): string {
  if (seconds < 1) return 'just now';
  if (seconds < 60) return `${Math.floor(seconds)} s ago`;
  if (seconds < 3600) return `${Math.floor(seconds / 60)} min ago`;
  if (seconds < 48 * 3600) return `${Math.floor(seconds / 3600)} h ago`;
  return `${Math.floor(seconds / 86_400)} d ago`;
}

/**
 * A moment as one reads it: “14:02” today, otherwise “3 March, 14:02”, with the year where it is another one.
 * @param iso ISO 8601 @param now milliseconds since 1970 @param timeZone IANA name; the browser's own if left out
 */
export function momentOnScreen(iso: string, now: number, timeZone?: string): string {
  const part = (of: Date | number, options: Intl.DateTimeFormatOptions) =>
    new Intl.DateTimeFormat('en-GB', { ...options, ...(timeZone === undefined ? {} : { timeZone }) }).format(of);
  const day: Intl.DateTimeFormatOptions = { day: 'numeric', month: 'long', year: 'numeric' };
  const then = new Date(iso);
  const time = part(then, { hour: '2-digit', minute: '2-digit', hourCycle: 'h23' });
  if (part(then, day) === part(now, day)) return time;
  const sameYear = part(then, { year: 'numeric' }) === part(now, { year: 'numeric' });
  return `${part(then, sameYear ? { day: 'numeric', month: 'long' } : day)}, ${time}`;
}

/** Reads “8 h”, “90 min”, “1 h 30 min”, “45 s”, “2 d”, or a bare number of hours. Null if it is none of these, or nothing. */
export function readSpan(text: string): number | null {
  const sizes: Readonly<Record<string, number>> = { d: 86_400, h: 3600, min: 60, m: 60, s: 1 };
  const compact = text.trim().toLowerCase();
  if (/^\d+(?:\.\d+)?$/.test(compact)) return asSeconds(Number(compact) * 3600);
  if (!/^(?:\d+(?:\.\d+)?\s*(?:d|h|min|m|s)\s*)+$/.test(compact)) return null;
  let total = 0;
  for (const [, size, unit] of compact.matchAll(/(\d+(?:\.\d+)?)\s*(min|[dhms])/g)) {
    total += Number(size) * sizes[unit!]!;
  }
  return asSeconds(total);
}

function asSeconds(seconds: number): number | null {
  const whole = Math.round(seconds);
  return whole >= 1 && Number.isSafeInteger(whole) ? whole : null;
}
