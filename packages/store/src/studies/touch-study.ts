import type { Sql } from '../database.ts';

/** Newest activity first: whatever happens in a study moves it up. */
export async function touchStudy(tx: Sql, studyId: string): Promise<void> {
  await tx.change('update study set changed_at = clock_timestamp() where id = $1', [studyId]);
}
