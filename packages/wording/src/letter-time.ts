/** Times in a letter: a moment in a named zone, and an amount of CPU time. */

/** “on 3 March at 22:10 (UTC)”. @param iso ISO 8601 @param timeZone IANA name */
export function momentInWords(iso: string, timeZone: string): string {
  const parts = Object.fromEntries(
    new Intl.DateTimeFormat('en-GB', {
      timeZone,
      day: 'numeric',
      month: 'long',
      hour: '2-digit',
      minute: '2-digit',
      hourCycle: 'h23',
    })
      .formatToParts(new Date(iso))
      .map((part) => [part.type, part.value]),
  );
  return `on ${parts.day} ${parts.month} at ${parts.hour}:${parts.minute} (${timeZone})`;
}

/** “13 h 31 min”, “4 min 10 s”, “12 s”, “under a second”. @param ms milliseconds */
export function cpuTimeInWords(ms: number): string {
  const seconds = Math.floor(ms / 1000);
  if (seconds < 1) return 'Under a second';
  const [hours, minutes, rest] = [Math.floor(seconds / 3600), Math.floor(seconds / 60) % 60, seconds % 60];
  if (hours > 0) return minutes > 0 ? `${hours} h ${minutes} min` : `${hours} h`;
  if (minutes > 0) return rest > 0 ? `${minutes} min ${rest} s` : `${minutes} min`;
  return `${rest} s`;
}
