/** Questions, their searches and certificates. */
import type { Cover, QuestionView } from '@palmette/contracts';
import { request, requestBytes, requestTagged } from './client.ts';

const at = (id: string) => `/questions/${encodeURIComponent(id)}`;

/**
 * Sends a question document as it was written, so that big integers and their spelling stay as typed.
 * @param key made once for each press of the button: a second sending of the same makes no second question
 */
export const askQuestion = (studyId: string, document: string, key: string) =>
  request<{ id: string; state: string }>('POST', `/studies/${encodeURIComponent(studyId)}/questions`, {
    text: document,
    headers: { 'idempotency-key': key },
  });

export const pollQuestion = (id: string, etag: string | null, signal: AbortSignal) =>
  requestTagged<QuestionView>(at(id), etag, signal);
export const getCover = (id: string, signal: AbortSignal) => request<Cover>('GET', `${at(id)}/cover`, { signal });

export const certificateAddress = (id: string) => `/api${at(id)}/certificate`;
export const getCertificate = (id: string, signal: AbortSignal) => requestBytes(`${at(id)}/certificate`, signal);

export const withdraw = (id: string) => request<QuestionView>('POST', `${at(id)}/withdraw`, { body: {} });
export const hold = (id: string) => request<QuestionView>('POST', `${at(id)}/hold`, { body: {} });
export const resume = (id: string) => request<QuestionView>('POST', `${at(id)}/resume`, { body: {} });
export const extend = (id: string, cpuSeconds: number) =>
  request<QuestionView>('POST', `${at(id)}/extend`, { body: { cpuSeconds } });
