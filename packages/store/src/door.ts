/**
 * What the store offers to the server and the station. Ids are strings, times are ISO strings in UTC, CPU is in
 * milliseconds, big counts are bigint. Every write by a worker names its lease and is refused when fenced off.
 */
import type { Access, Allowance, Ground, Role, SearchPhase, SearchState, Verdict } from '@palmette/contracts';
import type * as contracts from '@palmette/contracts';

export interface PersonRow {
  readonly id: string;
  readonly email: string;
  readonly name: string;
  readonly role: Role;
  readonly passwordHash: string | null;
  readonly tokenVersion: number;
  readonly active: boolean;
  readonly letters: { readonly settled: boolean; readonly spent: boolean; readonly broken: boolean };
  readonly appearance: 'system' | 'light' | 'dark';
}

/** Who acts; kept in the audit trail. */
export interface Actor {
  readonly id: string;
  readonly role: Role;
}

export interface PeopleStore {
  byEmail(email: string): Promise<PersonRow | null>;
  byId(id: string): Promise<PersonRow | null>;
  seen(id: string): Promise<void>;
  /** Creates the person without password together with the invitation link and its letter. Conflict if the e-mail exists. */
  invite(
    by: Actor | null,
    invitation: { email: string; name: string; role: Role; keySha256: string; letter: LetterDraft },
  ): Promise<PersonRow>;
  /** A person with a password at once: for the first admin and the demo. */
  create(person: {
    email: string;
    name: string;
    role: Role;
    passwordHash: string;
    allowance?: Allowance;
  }): Promise<PersonRow>;
  keyLink(keySha256: string): Promise<{ purpose: 'invitation' | 'password'; person: PersonRow } | null>;
  /** Uses a link once: sets the password, raises the token version. Null if it is unknown, used or expired. */
  useKeyLink(
    keySha256: string,
    purpose: 'invitation' | 'password',
    passwordHash: string,
    name?: string,
  ): Promise<PersonRow | null>;
  forgotten(personId: string, keySha256: string, letter: LetterDraft): Promise<void>;
  setPassword(personId: string, passwordHash: string): Promise<PersonRow>;
  change(
    personId: string,
    change: { name?: string; letters?: PersonRow['letters']; appearance?: PersonRow['appearance'] },
  ): Promise<PersonRow>;
  /** Role or activity by an admin; raises the token version so that it bites at the next request. */
  administer(by: Actor, personId: string, change: { role?: Role; active?: boolean }): Promise<PersonRow>;
  setAllowance(by: Actor, personId: string, allowance: Allowance): Promise<void>;
  allowance(personId: string): Promise<Allowance>;
  listForAdmin(): Promise<contracts.PersonAdmin[]>;
  makeToken(personId: string, name: string, tokenSha256: string): Promise<contracts.ApiToken>;
  tokens(personId: string): Promise<contracts.ApiToken[]>;
  revokeToken(personId: string, tokenId: string): Promise<boolean>;
  byToken(tokenSha256: string): Promise<PersonRow | null>;
}

export interface StudiesStore {
  make(by: Actor, title: string): Promise<contracts.Study>;
  list(personId: string, page: { after?: string | undefined; limit: number }): Promise<contracts.Page<contracts.Study>>;
  /** Null if it does not exist or the person is no member. */
  get(personId: string, studyId: string): Promise<contracts.Study | null>;
  access(personId: string, studyId: string): Promise<Access | null>;
  rename(by: Actor, studyId: string, title: string): Promise<void>;
  bin(by: Actor, studyId: string): Promise<void>;
  members(studyId: string): Promise<contracts.Member[]>;
  putMember(by: Actor, studyId: string, personId: string, access: Access): Promise<void>;
  /** The last lead cannot be removed or demoted: throws Refusal `conflict`. */
  removeMember(by: Actor, studyId: string, personId: string): Promise<void>;
  notes(
    studyId: string,
    questionId: string | null,
    page: { after?: string | undefined; limit: number },
  ): Promise<contracts.Page<contracts.Note>>;
  addNote(by: Actor, studyId: string, text: string, questionId: string | null): Promise<contracts.Note>;
}

export interface NewQuestion {
  readonly studyId: string;
  readonly title: string | null;
  /** Canonical question with title and budget, as JSON text. */
  readonly document: string;
  readonly sourceKind: string;
  readonly sourceLabel: string;
  readonly budgetCpuMs: number | null;
  readonly idempotency?: { readonly key: string; readonly bodySha256: string } | undefined;
}

export interface QuestionsStore {
  /** Question, search, first parcel (phase `choosing`), progress row and nudge in one transaction. Same idempotency key and body: the same question again (`repeated`); other body: Refusal `conflict`. */
  ask(by: Actor, question: NewQuestion): Promise<{ id: string; repeated: boolean }>;
  list(
    personId: string,
    studyId: string,
    page: { after?: string | undefined; limit: number },
  ): Promise<contracts.Page<contracts.QuestionSummary>>;
  byIds(personId: string, ids: readonly string[]): Promise<contracts.QuestionSummary[]>;
  /** Null if unknown or not visible to the person. `document` is parsed by the caller. */
  view(
    personId: string,
    questionId: string,
  ): Promise<(Omit<contracts.QuestionView, 'document'> & { document: string }) | null>;
  /** One indexed read for the ETag. */
  progressSeq(personId: string, questionId: string): Promise<string | null>;
  cover(questionId: string): Promise<contracts.Cover>;
  /** The certificate's raw bytes in order, or null if there is none yet. */
  certificate(questionId: string): Promise<{ sha256: string; bytes: number; chunks: AsyncIterable<Uint8Array> } | null>;
  /** Refusal `state` if the state does not allow it. Held parcels yield; withdrawn ones are stopped. */
  hold(by: Actor, questionId: string): Promise<void>;
  resume(by: Actor, questionId: string): Promise<void>;
  withdraw(by: Actor, questionId: string): Promise<void>;
  extend(by: Actor, questionId: string, cpuMs: number): Promise<void>;
}

export interface PoolStore {
  view(personId: string): Promise<contracts.Pool>;
  stations(): Promise<contracts.Station[]>;
  standBy(by: Actor, stationId: string, standBy: boolean): Promise<boolean>;
  holdPool(by: Actor, held: boolean): Promise<void>;
  usage(days: number): Promise<contracts.UsageRow[]>;
  audit(page: { after?: string | undefined; limit: number }): Promise<contracts.Page<contracts.AuditRow>>;
  letters(page: { after?: string | undefined; limit: number }): Promise<contracts.Page<contracts.LetterRow>>;
  health(): Promise<contracts.Health>;
}

// ---- for the station

/** What a worker holds while it runs a parcel; `attempt` fences every write. */
export interface Lease {
  readonly parcelId: string;
  readonly attempt: number;
  readonly searchId: string;
  readonly personId: string;
  readonly phase: SearchPhase;
  readonly stage: number;
  readonly from: readonly number[];
  readonly to: readonly number[] | null;
  readonly checkpoint: string | null;
  readonly chunks: number;
  readonly alone: boolean;
  readonly cpuMs: number;
  readonly nodes: bigint;
  readonly orbits: bigint;
  /** Question document text, plan text (null before it is chosen), what is left of the budget. */
  readonly document: string;
  readonly plan: string | null;
  readonly stageResults: string;
  readonly budgetLeftMs: number | null;
}

/** One piece of a cover to be inserted. */
export interface ParcelDraft {
  readonly from: readonly number[];
  readonly to: readonly number[] | null;
  readonly share: number;
}

/** What a worker reports at a checkpoint; deltas since the last one. */
export interface CheckpointWrite {
  readonly checkpoint: string;
  readonly nodes: bigint;
  readonly orbits: bigint;
  readonly cpuMs: number;
  readonly shareDone: number;
  readonly nodesPerSecond: number | null;
  /** New chunks of found embeddings (JSON lines, raw), numbered on from the lease's `chunks`. */
  readonly chunks: readonly { readonly records: number; readonly raw: Uint8Array }[];
}

/** Where a chunk stands among those of its stage. */
export interface FoundPlace {
  readonly from: string;
  readonly parcelId: string;
  readonly no: number;
}

export interface FoundChunk {
  readonly place: FoundPlace;
  readonly records: number;
  readonly raw: Uint8Array;
}

/** What the search wants from the worker after a write. */
export type Advice = 'go on' | 'yield' | 'stop';

/** Facts that become known when a plan is chosen or a verdict is settled. */
export interface SearchFacts {
  readonly rank?: number;
  readonly method?: string;
  readonly plan?: string;
  readonly estimate?: string;
}

export interface VerdictWrite {
  readonly verdict: Exclude<Verdict, 'open'>;
  readonly ground: Ground;
  readonly complete: boolean;
  readonly rank: number;
  readonly dimension: number | null;
  readonly orbits: bigint | null;
  readonly total: bigint | null;
  /** One sentence on what was chosen and why, where the search had no plan before. */
  readonly method?: string | undefined;
  readonly certificate: {
    readonly sha256: string;
    /** The bytes; or the search's draft, whose bytes were hashed as they were checked. */
    readonly raw: readonly Uint8Array[] | 'draft';
    readonly checkerLine: string;
    readonly checkerRevision: number;
    readonly checkCpuMs: number;
  };
}

/** A fenced write came too late: somebody else holds the parcel, or the search has ended. */
export class FencedOff extends Error {
  override readonly name = 'FencedOff';
}

export interface WorkStore {
  registerStation(station: { id: string; name: string; version: string; workers: number }): Promise<void>;
  /** Heartbeat of station and its leases; answers what is asked of it: stand by, and per parcel yield or stop. */
  heartbeat(
    stationId: string,
    report: { busy: number; memoryBytes: number; leases: readonly { parcelId: string; attempt: number }[] },
  ): Promise<{ standBy: boolean; advice: ReadonlyMap<string, Advice> }>;
  stationStopped(stationId: string): Promise<void>;
  /**
   * The next parcel in fair turn within everybody's allowance, or null. When all is busy it may ask a running parcel to
   * yield. A search whose budget is used up is handed out once nothing of it runs, with `budgetLeftMs` ≤ 0: the worker
   * ends it with `spend`.
   */
  claim(
    stationId: string,
    options: { freeWorkers: number; revisions: readonly number[]; canRunAlone: boolean },
  ): Promise<Lease | null>;
  checkpoint(lease: Lease, write: CheckpointWrite): Promise<Advice>;
  /** Gives the rest of an interval to new parcels: shortens `to` and inserts [mid, to), in one fenced transaction. */
  recut(lease: Lease, mid: readonly number[], shareKept: number): Promise<Lease>;
  /** Back to waiting with its last checkpoint (yield, stand by, allowance, hold). */
  release(lease: Lease): Promise<void>;
  /** The parcel is done. Answers true to exactly one caller: to the one that ended the last parcel of the stage. */
  finish(lease: Lease, write: CheckpointWrite, result: string | null): Promise<boolean>;
  /** First witness of a scope-one search: the other parcels are not needed. True to exactly one caller. */
  witness(lease: Lease, write: CheckpointWrite): Promise<boolean>;
  /** Plan and first cover, or the next stage's cover, or the next phase; the search goes on with these parcels. */
  goOn(
    searchId: string,
    next: {
      phase: SearchPhase;
      stage: number;
      stageResults: string;
      facts: SearchFacts;
      parcels: readonly ParcelDraft[];
    },
  ): Promise<void>;
  /** The chunk of found embeddings after this place (null: the first) in address order of a stage's parcels, or null. */
  found(searchId: string, stage: number, after: FoundPlace | null): Promise<FoundChunk | null>;
  /** Parcels of a phase and stage with their results, in address order. */
  parcels(
    searchId: string,
    phase: SearchPhase,
    stage: number,
  ): Promise<
    readonly {
      from: readonly number[];
      to: readonly number[] | null;
      nodes: bigint;
      orbits: bigint;
      cpuMs: number;
      result: string | null;
    }[]
  >;
  /**
   * Keeps bytes and answers the hashes of their pieces (at most 1 MiB each), in order. Nothing points to them yet; the same
   * bytes again change nothing.
   */
  keepBytes(raw: Uint8Array): Promise<readonly string[]>;
  /** Makes kept pieces, in this order, the search's draft: a certificate that is still being checked. All or none of it. */
  keepDraft(searchId: string, pieces: readonly string[]): Promise<void>;
  /** A piece of the draft, from 0; null after the last. */
  draft(searchId: string, no: number): Promise<Uint8Array | null>;
  /**
   * Settled: verdict, certificate, letters to be sent, in one transaction. False if the search had already ended; false
   * also while it is held or spent: then its parcel waits and is done again when the search goes on.
   */
  settle(searchId: string, verdict: VerdictWrite, letters: LetterWriter): Promise<boolean>;
  /** Budget used up (or memory): partial results stay; running parcels are asked to yield and may still write. Can be extended
   * and goes on where it was. With `onlyIfUsedUp` nothing happens (false) where the budget was extended meanwhile. */
  spend(searchId: string, reason: string, letters: LetterWriter, onlyIfUsedUp?: boolean): Promise<boolean>;
  broken(searchId: string, reason: string, letters: LetterWriter): Promise<boolean>;
  /** A worker process died with this lease: counts the crash, makes it run alone, `broken` after three alone. */
  crashed(lease: Lease, reason: string, letters: LetterWriter): Promise<void>;
  /** Returns stale leases (counted as crashes only where the station is gone without a word), re-issues nudges, ends spent days. */
  sweep(options: { leaseSeconds: number; letters: LetterWriter }): Promise<{ returned: number; nudged: number }>;
  /** LISTEN on the nudges of the database; calls back when there may be work or advice. Returns how to stop. */
  onNudge(call: () => void): Promise<() => Promise<void>>;
}

export interface LetterDraft {
  readonly recipient: string;
  readonly subject: string;
  readonly body: string;
}

/** What a letter about an ending has to say; the store hands it what it knows, the station words it. */
export type LetterWriter = (ending: {
  readonly ending: Extract<SearchState, 'settled' | 'spent' | 'broken'>;
  readonly person: { readonly name: string; readonly email: string };
  readonly question: {
    readonly id: string;
    readonly title: string | null;
    readonly sourceLabel: string;
    readonly studyTitle: string;
  };
  readonly verdict: Verdict;
  readonly ground: string | null;
  readonly dimension: number | null;
  readonly orbits: string | null;
  readonly complete: boolean;
  readonly reason: string | null;
  readonly cpuMs: number;
  readonly startedAt: string;
}) => { readonly subject: string; readonly body: string };

export interface LetterStore {
  /** Claims one due letter (fenced by attempt), or null. A letter `sending` for over two minutes is due again, with the same Message-ID. */
  claim(): Promise<{
    id: string;
    attempt: number;
    recipient: string;
    subject: string;
    body: string;
    messageId: string;
  } | null>;
  sent(id: string, attempt: number): Promise<void>;
  /** Tried again later, with growing waits; `failed` only after a permanent refusal by the mail server. */
  failed(id: string, attempt: number, fault: string, permanent: boolean): Promise<void>;
}

export interface Store {
  readonly people: PeopleStore;
  readonly studies: StudiesStore;
  readonly questions: QuestionsStore;
  readonly pool: PoolStore;
  readonly work: WorkStore;
  readonly letters: LetterStore;
  close(): Promise<void>;
}

export interface StoreOptions {
  readonly databaseUrl: string;
  /** Schema of our tables; tests use one each. */
  readonly schema?: string;
  readonly applicationName: string;
  readonly defaultAllowance: Allowance;
  readonly poolTimeZone: string;
  readonly onError: (error: unknown) => void;
}
