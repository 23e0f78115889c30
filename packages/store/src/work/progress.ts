/** The narrow table that polling reads. */
import type { Sql } from '../database.ts';

/** A change of state is always told. */
export async function changedState(tx: Sql, searchId: string): Promise<void> {
  await tx.change('update progress set seq = seq + 1, changed_at = clock_timestamp() where search_id = $1', [searchId]);
}

/**
 * Figures are told at most once in two seconds for each search, however many workers run it; the first rate of a stage
 * at once.
 */
export async function changedFigures(tx: Sql, searchId: string, nodesPerSecond: number | null): Promise<void> {
  await tx.change(
    `update progress set seq = seq + 1, changed_at = clock_timestamp(), heard_at = clock_timestamp(),
       nodes_per_second = coalesce($2::float8, nodes_per_second)
     where search_id = $1 and (heard_at is null or changed_at <= clock_timestamp() - interval '2 seconds'
       or (nodes_per_second is null and $2::float8 is not null))`,
    [searchId, nodesPerSecond],
  );
}

/** Another tree has another rate. */
export async function forgetRate(tx: Sql, searchId: string): Promise<void> {
  await tx.change('update progress set nodes_per_second = null where search_id = $1', [searchId]);
}
