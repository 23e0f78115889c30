/** From the text of a request to a question that is kept: read strictly, judged, written in its canonical form. */
import { createHash } from 'node:crypto';
import { canonicalQuestion, readQuestion, Refusal } from '@palmette/contracts';
import { sourceLabel } from '@palmette/lattice';
import type { PersonRow } from '@palmette/store';
import type { Services } from '../../services.ts';

const LONGEST_KEY = 200;

/** @throws Refusal with the path of the field, what was expected and what was found */
export async function ask(
  services: Services,
  person: PersonRow,
  studyId: string,
  text: string,
  idempotencyKey: string | undefined,
): Promise<string> {
  if (idempotencyKey !== undefined && !/^[\x21-\x7e]+$/.test(idempotencyKey.slice(0, LONGEST_KEY + 1))) {
    throw new Refusal('shape', 'Idempotency-Key: expected visible ASCII characters');
  }
  if ((idempotencyKey?.length ?? 0) > LONGEST_KEY)
    throw new Refusal(
      'limit',
      `Idempotency-Key: expected at most ${LONGEST_KEY} characters, found ${idempotencyKey!.length}`,
    );
  const question = readQuestion(text);
  await services.sources.check(question.source);
  const { title, budget } = question;
  const canonical = canonicalQuestion(question);
  const document = JSON.stringify({
    ...canonical,
    ...(title === undefined ? {} : { title }),
    ...(budget === undefined ? {} : { budget }),
  });
  const asked = await services.store.questions.ask(person, {
    studyId,
    title: title ?? null,
    document,
    sourceKind: question.source.kind,
    sourceLabel: sourceLabel(question.source),
    budgetCpuMs: budget === undefined ? null : budget.cpuSeconds * 1000,
    ...(idempotencyKey === undefined
      ? {}
      : { idempotency: { key: idempotencyKey, bodySha256: createHash('sha256').update(text).digest('hex') } }),
  });
  return asked.id;
}
