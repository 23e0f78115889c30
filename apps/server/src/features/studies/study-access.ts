/** Access to one study. What one may not see does not exist. */
import { Refusal, type Access } from '@palmette/contracts';
import type { Services } from '../../services.ts';

const MAY: Readonly<Record<'read' | 'write' | 'lead', readonly Access[]>> = {
  read: ['lead', 'coauthor', 'reader'],
  write: ['lead', 'coauthor'],
  lead: ['lead'],
};

/** @throws Refusal `not-found` for who is no member, `forbidden` for a member who may not do this */
export async function needAccess(
  services: Services,
  personId: string,
  studyId: string,
  what: keyof typeof MAY,
): Promise<void> {
  const access = await services.store.studies.access(personId, studyId);
  if (access === null) throw new Refusal('not-found', 'there is no such study');
  if (!MAY[what].includes(access))
    throw new Refusal('forbidden', `expected ${MAY[what].join(' or ')} of this study, found ${access}`);
}
