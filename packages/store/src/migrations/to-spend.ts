import type { MigrationInterface, QueryRunner } from 'typeorm';

/** A parcel that was handed out only so that a worker ends its search, whose budget is used up. */
export class ToSpend implements MigrationInterface {
  readonly name = 'ToSpend1764590400000';

  async up(runner: QueryRunner): Promise<void> {
    await runner.query('alter table parcel add column to_spend boolean not null default false');
  }

  async down(runner: QueryRunner): Promise<void> {
    await runner.query('alter table parcel drop column to_spend');
  }
}
