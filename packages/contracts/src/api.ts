/** Requests and responses of the HTTP API. The server validates with these schemas and generates OpenAPI from them. */
import { z } from 'zod';
import { wireInteger } from './integer.ts';
import { LIMITS } from './limits.ts';
import { ERROR_CODES } from './errors.ts';
import { question, SCOPES, target } from './question.ts';
import {
  ACCESSES,
  GROUNDS,
  ROLES,
  SEARCH_PHASES,
  SEARCH_STATES,
  STATION_STATES,
  VERDICTS,
  WAIT_REASONS,
} from './states.ts';

const id = z.string().min(1).max(80);
const time = z.iso.datetime().describe('UTC, ISO 8601');
const count = z.string().regex(/^\d+$/).describe('a whole number that can grow, as a decimal string');
const email = z.string().trim().toLowerCase().pipe(z.email().max(254));
const password = z.string().min(LIMITS.passwordMinimum).max(LIMITS.passwordCharacters);
const name = z.string().trim().min(1).max(LIMITS.nameCharacters);
const title = z.string().trim().min(1).max(LIMITS.titleCharacters);
const emptyToNothing = z.strictObject({});

export const errorBody = z.strictObject({
  error: z.strictObject({ code: z.enum(ERROR_CODES), message: z.string(), path: z.string().optional() }),
});

// People and sessions
export const signIn = z.strictObject({ email, password: z.string().min(1).max(LIMITS.passwordCharacters) });
export const person = z.strictObject({ id, email: z.string(), name: z.string(), role: z.enum(ROLES) });
export const session = z.strictObject({ person });
export const letterChoices = z.strictObject({ settled: z.boolean(), spent: z.boolean(), broken: z.boolean() });
export const account = z.strictObject({
  person,
  letters: letterChoices,
  appearance: z.enum(['system', 'light', 'dark']),
});
export const accountChange = z.strictObject({
  name: name.optional(),
  letters: letterChoices.optional(),
  appearance: z.enum(['system', 'light', 'dark']).optional(),
});
export const passwordChange = z.strictObject({
  current: z.string().min(1).max(LIMITS.passwordCharacters),
  next: password,
});
export const passwordForgotten = z.strictObject({ email });
export const passwordReset = z.strictObject({ key: z.string().min(20).max(200), password });
export const invitationAccept = z.strictObject({ key: z.string().min(20).max(200), name: name.optional(), password });
/** What an invitation or a reset link is for, before it is used. */
export const keyInfo = z.strictObject({
  purpose: z.enum(['invitation', 'password']),
  email: z.string(),
  name: z.string(),
});
export const apiToken = z.strictObject({ id, name: z.string(), createdAt: time, lastUsedAt: time.nullable() });
export const apiTokenMake = z.strictObject({ name });
/** The secret is shown once. */
export const apiTokenMade = apiToken.extend({ token: z.string() });

// Studies
export const studyMake = z.strictObject({ title });
export const studyChange = z.strictObject({ title: title.optional() });
export const study = z.strictObject({
  id,
  title: z.string(),
  access: z.enum(ACCESSES),
  changedAt: time,
  createdAt: time,
  counts: z.strictObject({ embeds: z.number(), excluded: z.number(), open: z.number(), searching: z.number() }),
});
export const memberPut = z.strictObject({ email, access: z.enum(ACCESSES) });
export const member = z.strictObject({
  person: person.omit({ role: true }),
  access: z.enum(ACCESSES),
  letters: z.boolean(),
});
export const noteMake = z.strictObject({
  text: z.string().trim().min(1).max(LIMITS.noteCharacters),
  questionId: id.optional(),
});
export const note = z.strictObject({ id, text: z.string(), by: z.string(), at: time, questionId: id.nullable() });

// Questions
export const progress = z.strictObject({
  phase: z.enum(SEARCH_PHASES).nullable(),
  elapsedSeconds: z.number().describe('wall time since the search was accepted, ends with it'),
  cpuSeconds: z.number(),
  nodes: count,
  nodesPerSecond: z.number().nullable().describe('of one worker, over its own CPU time'),
  orbitsFound: count,
  share: z.number().min(0).max(1).nullable().describe('share of the tree that is done, by the estimate of the parcels'),
  shareRange: z.tuple([z.number(), z.number()]).nullable(),
  remainingCpuSeconds: z
    .strictObject({ low: z.number(), likely: z.number(), high: z.number() })
    .nullable()
    .describe('8 times in 10'),
  workers: z.number(),
  parcels: z.strictObject({ done: z.number(), inHand: z.number(), waiting: z.number() }),
  place: z.number().nullable().describe('your place in turn while waiting, 1 is next'),
  waitReason: z.enum(WAIT_REASONS).nullable(),
  heardAt: time.nullable(),
});
export const questionSummary = z.strictObject({
  id,
  studyId: id,
  title: z.string().nullable(),
  sourceKind: z.string(),
  sourceLabel: z.string().describe('the source in short: P(3, 5, -7), 17/5, matrix 8 × 8'),
  target,
  scope: z.enum(SCOPES),
  state: z.enum(SEARCH_STATES),
  verdict: z.enum(VERDICTS),
  ground: z.enum(GROUNDS).nullable(),
  reason: z.string().nullable().describe('why it is broken, spent or waiting, in words'),
  rank: z.number().nullable(),
  dimension: z.number().nullable(),
  orbits: count.nullable(),
  total: count.nullable(),
  complete: z.boolean(),
  askedBy: z.string(),
  mine: z.boolean(),
  createdAt: time,
  endedAt: time.nullable(),
  cpuSeconds: z.number(),
});
export const questionView = questionSummary.extend({
  document: question.describe('the question as entered'),
  method: z.string().nullable().describe('one sentence on what was chosen and why'),
  budgetCpuSeconds: z.number().nullable(),
  heldBy: z.string().nullable(),
  progress,
  certificate: z
    .strictObject({
      sha256: z.string(),
      bytes: z.number(),
      checkerLine: z.string(),
      checkerRevision: z.number(),
      checkCpuSeconds: z.number(),
      checkedAt: time,
    })
    .nullable(),
});
/** One block of the cover: width is its share of the tree, done the part of it that is finished. */
export const parcelView = z.strictObject({
  no: z.number(),
  share: z.number(),
  done: z.number(),
  state: z.enum(['done', 'in hand', 'waiting']),
});
export const cover = z.strictObject({ parcels: z.array(parcelView) });
export const extend = z.strictObject({ cpuSeconds: z.number().int().min(1).max(LIMITS.budgetCpuSeconds) });

// Pool and administration
export const allowance = z.strictObject({
  workers: z.number().int().min(0).max(10_000),
  cpuSecondsPerDay: z.number().int().min(0).max(100_000_000),
});
export const pool = z.strictObject({
  workers: z.number(),
  busy: z.number(),
  yours: z.strictObject({ busy: z.number(), running: z.array(questionSummary), waiting: z.array(questionSummary) }),
  others: z.strictObject({ busy: z.number(), searching: z.number(), waiting: z.number() }),
  allowance,
  cpuSecondsUsedToday: z.number(),
  dayEndsAt: time,
  held: z.boolean(),
});
export const personAdmin = person.extend({
  active: z.boolean(),
  invited: z.boolean().describe('has not accepted the invitation yet'),
  allowance,
  workersBusy: z.number(),
  cpuSecondsToday: z.number(),
  lastSeenAt: time.nullable(),
});
export const invitationMake = z.strictObject({ email, name, role: z.enum(ROLES) });
export const personChange = z.strictObject({ role: z.enum(ROLES).optional(), active: z.boolean().optional() });
export const station = z.strictObject({
  id,
  name: z.string(),
  state: z.enum(STATION_STATES),
  workers: z.number(),
  busy: z.number(),
  startedAt: time,
  heardAt: time,
  memoryBytes: z.number(),
  version: z.string(),
});
export const usageRow = z.strictObject({ person: z.string(), day: z.string(), cpuSeconds: z.number() });
export const auditRow = z.strictObject({
  id,
  at: time,
  by: z.string().nullable(),
  action: z.string(),
  subject: z.string(),
  detail: z.string(),
});
export const letterRow = z.strictObject({
  id,
  to: z.string(),
  subject: z.string(),
  state: z.enum(['waiting', 'sent', 'failed']),
  attempts: z.number(),
  createdAt: time,
  sentAt: time.nullable(),
  fault: z.string().nullable(),
});
export const health = z.strictObject({
  database: z.boolean(),
  queue: z.boolean(),
  stationHeardAt: time.nullable(),
  stations: z.number(),
});

export function page<T extends z.ZodType>(item: T) {
  return z.strictObject({
    items: z.array(item).readonly(),
    next: z.string().nullable().describe('cursor of the next page'),
  });
}
export const pageQuery = z.object({
  after: z.string().max(200).optional(),
  limit: z.coerce.number().int().min(1).max(LIMITS.pageItems).optional(),
});
export const nothing = emptyToNothing;
export { wireInteger as wireIntegerSchema };

export type Person = z.output<typeof person>;
export type Account = z.output<typeof account>;
export type Study = z.output<typeof study>;
export type Member = z.output<typeof member>;
export type Note = z.output<typeof note>;
export type Progress = z.output<typeof progress>;
export type QuestionSummary = z.output<typeof questionSummary>;
export type QuestionView = z.output<typeof questionView>;
export type ParcelView = z.output<typeof parcelView>;
export type Cover = z.output<typeof cover>;
export type Allowance = z.output<typeof allowance>;
export type Pool = z.output<typeof pool>;
export type PersonAdmin = z.output<typeof personAdmin>;
export type Station = z.output<typeof station>;
export type UsageRow = z.output<typeof usageRow>;
export type AuditRow = z.output<typeof auditRow>;
export type LetterRow = z.output<typeof letterRow>;
export type Health = z.output<typeof health>;
export type ApiToken = z.output<typeof apiToken>;
export type ApiTokenMade = z.output<typeof apiTokenMade>;
export interface Page<T> {
  readonly items: readonly T[];
  readonly next: string | null;
}
