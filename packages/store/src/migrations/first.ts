import type { MigrationInterface, QueryRunner } from 'typeorm';
import { FIRST_SCHEMA } from './0001-first.sql.ts';

/** TypeORM orders migrations by the thirteen digits at the end of the name. */
export class First implements MigrationInterface {
  readonly name = 'First1764547200000';

  async up(runner: QueryRunner): Promise<void> {
    await runner.query(FIRST_SCHEMA);
  }

  /** A first schema has nothing to go back to. */
  async down(): Promise<void> {
    throw new Error('the first migration cannot be undone: drop the schema instead');
  }
}
