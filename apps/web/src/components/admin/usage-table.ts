/** Rows of usage as a table: people with the most first, days in order, the largest day for the height of the bars. */
import type { UsageRow } from '@palmette/contracts';

export interface UsageTable {
  readonly days: readonly string[];
  readonly people: readonly { readonly person: string; readonly seconds: readonly number[]; readonly sum: number }[];
  readonly most: number;
}

export function usageTable(rows: readonly UsageRow[]): UsageTable {
  const days = [...new Set(rows.map((row) => row.day))].sort();
  const persons = [...new Set(rows.map((row) => row.person))];
  const people = persons.map((person) => {
    const own = rows.filter((row) => row.person === person);
    const seconds = days.map((day) =>
      own.filter((row) => row.day === day).reduce((sum, row) => sum + row.cpuSeconds, 0),
    );
    return { person, seconds, sum: seconds.reduce((a, b) => a + b, 0) };
  });
  people.sort((a, b) => b.sum - a.sum || a.person.localeCompare(b.person));
  return { days, people, most: Math.max(1, ...people.flatMap((row) => row.seconds)) };
}
