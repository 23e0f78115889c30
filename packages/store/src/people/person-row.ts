import type { PersonRow } from '../door.ts';
import type { PersonEntity } from '../entities/index.ts';

export function personRow(person: PersonEntity): PersonRow {
  const { id, email, name, role, passwordHash, tokenVersion, active, appearance } = person;
  const { lettersSettled: settled, lettersSpent: spent, lettersBroken: broken } = person;
  return { id, email, name, role, passwordHash, tokenVersion, active, appearance, letters: { settled, spent, broken } };
}

const UUID = /^[0-9a-f]{8}-[0-9a-f]{4}-[0-9a-f]{4}-[0-9a-f]{4}-[0-9a-f]{12}$/i;

/** An id from outside that is no uuid names nothing; PostgreSQL would call it a fault. */
export function isId(text: string): boolean {
  return UUID.test(text);
}
