/** Studies: the folders that people share, their members and notes. */
import type { Member, Note, Page, QuestionSummary, Study } from '@palmette/contracts';
import { query, request, requestTagged } from './client.ts';

type Access = Study['access'];
interface PageOptions {
  readonly after?: string | undefined;
  readonly limit?: number;
  readonly signal?: AbortSignal;
}

const at = (id: string) => `/studies/${encodeURIComponent(id)}`;
const withSignal = (signal?: AbortSignal) => (signal === undefined ? {} : { signal });
const pageOf = ({ after, limit }: PageOptions) => query({ after, limit });

export const listStudies = (page: PageOptions = {}) =>
  request<Page<Study>>('GET', `/studies${pageOf(page)}`, withSignal(page.signal));
export const makeStudy = (title: string) => request<Study>('POST', '/studies', { body: { title } });
export const getStudy = (id: string, signal?: AbortSignal) => request<Study>('GET', at(id), withSignal(signal));
export const renameStudy = (id: string, title: string) => request<Study>('PATCH', at(id), { body: { title } });
export const deleteStudy = (id: string) => request<void>('DELETE', at(id));

export const listMembers = (id: string, signal?: AbortSignal) =>
  request<Page<Member>>('GET', `${at(id)}/members`, withSignal(signal));
export const putMember = (id: string, email: string, access: Access) =>
  request<Member>('PUT', `${at(id)}/members`, { body: { email, access } });
export const removeMember = (id: string, personId: string) =>
  request<void>('DELETE', `${at(id)}/members/${encodeURIComponent(personId)}`);

/** Notes of a study, or with `questionId` those on one question of it. */
export const listNotes = (id: string, page: PageOptions & { readonly questionId?: string | undefined } = {}) =>
  request<Page<Note>>(
    'GET',
    `${at(id)}/notes${query({ after: page.after, limit: page.limit, questionId: page.questionId })}`,
    withSignal(page.signal),
  );
export const makeNote = (id: string, text: string, questionId?: string) =>
  request<Note>('POST', `${at(id)}/notes`, { body: { text, ...(questionId === undefined ? {} : { questionId }) } });

export const listQuestions = (id: string, page: PageOptions = {}) =>
  request<Page<QuestionSummary>>('GET', `${at(id)}/questions${pageOf(page)}`, withSignal(page.signal));
/** The first page of a study's questions, or nothing if it is as before. */
export const pollQuestions = (id: string, limit: number, etag: string | null, signal: AbortSignal) =>
  requestTagged<Page<QuestionSummary>>(`${at(id)}/questions${query({ limit })}`, etag, signal);
