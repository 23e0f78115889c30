/** The pool, and what an admin sees and changes. */
import type { Allowance, AuditRow, LetterRow, Page, PersonAdmin, Pool, Station, UsageRow } from '@palmette/contracts';
import { query, request, requestTagged } from './client.ts';

type Role = PersonAdmin['role'];

export const pollPool = (etag: string | null, signal: AbortSignal) => requestTagged<Pool>('/pool', etag, signal);
export const holdPool = () => request<void>('POST', '/pool/hold', { body: {} });
export const resumePool = () => request<void>('POST', '/pool/resume', { body: {} });

export const listPeople = (after?: string, signal?: AbortSignal) =>
  request<Page<PersonAdmin>>('GET', `/people${query({ after })}`, signal ? { signal } : {});
export const invite = (body: { email: string; name: string; role: Role }) =>
  request<PersonAdmin>('POST', '/people/invitations', { body });
export const changePerson = (id: string, body: { role?: Role; active?: boolean }) =>
  request<PersonAdmin>('PATCH', `/people/${encodeURIComponent(id)}`, { body });
export const putAllowance = (id: string, body: Allowance) =>
  request<PersonAdmin>('PUT', `/people/${encodeURIComponent(id)}/allowance`, { body });

export const pollStations = (etag: string | null, signal: AbortSignal) =>
  requestTagged<Page<Station>>('/stations', etag, signal);
export const standBy = (id: string) =>
  request<void>('POST', `/stations/${encodeURIComponent(id)}/stand-by`, { body: {} });
export const takeWork = (id: string) =>
  request<void>('POST', `/stations/${encodeURIComponent(id)}/take-work`, { body: {} });

export const listUsage = (days: number, signal?: AbortSignal) =>
  request<Page<UsageRow>>('GET', `/usage${query({ days })}`, signal ? { signal } : {});
export const listAudit = (after?: string, signal?: AbortSignal) =>
  request<Page<AuditRow>>('GET', `/audit${query({ after })}`, signal ? { signal } : {});
export const listLetters = (after?: string, signal?: AbortSignal) =>
  request<Page<LetterRow>>('GET', `/letters${query({ after })}`, signal ? { signal } : {});
