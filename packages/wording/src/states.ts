/**
 * A search that is not settled, in sentences. Each says that open is no answer, and what happens next. The states are
 * those of contracts; on a screen they never stand as a bare word.
 */
import type { Progress, QuestionSummary, Scope, SearchState, Target } from '@palmette/contracts';
import { spanInWords } from './durations.ts';
import { plural, shareInWords } from './numbers.ts';
import { targetInWords } from './places.ts';

export type StateFacts = Pick<QuestionSummary, 'state' | 'reason' | 'target' | 'scope' | 'rank'> & {
  readonly progress: Pick<
    Progress,
    'phase' | 'share' | 'shareRange' | 'orbitsFound' | 'place' | 'waitReason' | 'cpuSeconds' | 'nodes'
  >;
  readonly budgetCpuSeconds: number | null;
  readonly heldBy: string | null;
  /** “00:00”: when the allowance of the day begins anew, where it is known. */
  readonly dayEndsAt?: string | undefined;
};

/** What is looked for: “every way into Z^27”. */
export function aim(target: Target, scope: Scope, rank: number | null): string {
  if ('least' in target)
    return scope === 'all' ? `${targetInWords(target, rank)}, and every way into it` : targetInWords(target, rank);
  if ('any' in target) return scope === 'all' ? 'every way, whatever the n' : 'one way into any Z^n';
  return `${scope === 'all' ? 'every way' : 'one way'} into ${targetInWords(target, rank)}`;
}

/** The heading of a question that is not settled. */
export function stateHeading(facts: StateFacts): string {
  const what = aim(facts.target, facts.scope, facts.rank);
  switch (facts.state) {
    case 'searching':
      if (facts.progress.phase === 'checking') return 'Open: the checker is at work';
      if (facts.progress.phase === 'assembling') return 'Open: the certificate is being written';
      return `Open: searching for ${what}`;
    case 'waiting':
      return begun(facts) ? 'Open: waiting to go on' : 'Open: waiting to begin';
    case 'held':
      return 'Open: held';
    case 'spent':
      return memoryGone(facts) ? 'Open: its memory is used up' : 'Open: its budget is used up';
    case 'withdrawn':
      return 'Open: withdrawn';
    case 'broken':
      if (refusalIn(facts.reason) !== null) return 'Refused: it cannot be answered as it was asked';
      return disagreementIn(facts.reason) === null ? 'Broken' : 'Broken: two methods disagree';
    case 'settled':
      return 'Settled';
  }
}

/** What a station found wrong with a question when it began: a place in the document, and the sentence. */
export function refusalIn(reason: string | null): { readonly path: string; readonly message: string } | null {
  const found = /^refused: (?:(\/\S*) )?(.*?)(?:\. Ask again with this mended)?\.?$/s.exec(reason ?? '');
  return found === null ? null : { path: found[1] ?? '', message: found[2]! };
}

const RESULT = String.raw`\w+ list \d+ orbits(?: \(set [^)]*\))?`;
const DISAGREEMENT = new RegExp(`two methods disagree at n = (\\d+): (${RESULT}, ${RESULT})`);

/** Where two methods disagree and what each of them lists; null if that is not the reason. */
export function disagreementIn(reason: string | null): string | null {
  const found = DISAGREEMENT.exec(reason ?? '');
  return found === null ? null : `at n = ${found[1]}: ${found[2]}`;
}

/** Null: the reason speaks for itself. */
function brokenLead(reason: string | null): string | null {
  const refusal = refusalIn(reason);
  if (refusal !== null) {
    const where = refusal.path === '' ? '' : ` (${refusal.path} of the question)`;
    return together(
      asSentence(`${refusal.message}${where}`),
      'Nothing was searched and nothing can be concluded.',
      'Restate it with this mended.',
    );
  }
  const disagreement = disagreementIn(reason);
  return disagreement === null
    ? null
    : together(
        asSentence(disagreement),
        'One of them is wrong, which is a fault of Palmette and no answer.',
        'Both results are kept. No verdict is shown until this is explained.',
      );
}

function begun(facts: StateFacts): boolean {
  return facts.progress.nodes !== '0' || facts.progress.cpuSeconds > 0;
}

function memoryGone(facts: StateFacts): boolean {
  return facts.reason?.includes('memory') === true;
}

/** The line under that heading. */
export function stateLead(facts: StateFacts): string {
  const progress = progressSentence(facts);
  const nothing = 'Nothing can be concluded.';
  switch (facts.state) {
    case 'searching':
      return searchingLead(facts);
    case 'waiting':
      return together(waitingReason(facts), 'Nothing can be concluded yet.');
    case 'held':
      return together(
        facts.heldBy === null ? 'It is held.' : `Held by ${asSentence(facts.heldBy)}`,
        progress,
        'What was done is kept; it can go on from here.',
        nothing,
      );
    case 'spent':
      return memoryGone(facts)
        ? together(asSentence(facts.reason!), progress, nothing)
        : together(
            `The search used ${facts.budgetCpuSeconds === null ? 'its budget' : `its ${spanInWords(facts.budgetCpuSeconds)} of CPU time`}.`,
            progress,
            nothing,
            'It can go on from here.',
          );
    case 'withdrawn':
      return together('It was withdrawn before it was settled.', progress, nothing, 'What was found is kept.');
    case 'broken':
      return (
        brokenLead(facts.reason) ??
        together(
          asSentence(facts.reason ?? 'no reason was recorded'),
          'This is a fault and no answer: no verdict is shown until it is explained.',
          'What was found is kept.',
        )
      );
    case 'settled':
      return '';
  }
}

function together(...sentences: readonly string[]): string {
  return sentences.filter((sentence) => sentence !== '').join(' ');
}

function searchingLead(facts: StateFacts): string {
  const { phase, share, orbitsFound } = facts.progress;
  if (phase === 'checking') return 'The list is done. No verdict is shown before the checker is through.';
  if (phase === 'assembling') return 'The list is done. What was found is put into a file that anyone can check.';
  if (phase === 'choosing') return 'The lattice is read and the way to search it is being chosen.';
  const rest =
    share === null
      ? 'the tree is still being searched'
      : `${shareInWords(1 - share)} of the tree is still to be searched`;
  return orbitsFound === '0'
    ? `Nothing found yet says nothing about the answer: ${rest}.`
    : `${plural(orbitsFound, 'orbit')} found so far; the list is not complete: ${rest}.`;
}

function waitingReason(facts: StateFacts): string {
  const { waitReason, place } = facts.progress;
  if (waitReason === 'allowance') {
    return `The allowance for today is used up. It goes on ${facts.dayEndsAt === undefined ? 'when the next day begins' : `at ${facts.dayEndsAt}`}; nothing is lost.`;
  }
  if (waitReason === 'pool')
    return 'The pool is held, or no station takes work at the moment. It goes on by itself; nothing is lost.';
  if (place === null) return 'It waits for a free worker.';
  return place === 1 ? 'It is next in turn.' : `Its place in turn is ${place}.`;
}

/** “About 61% of the tree is done (55% to 68%).”, or nothing where nobody can say. */
function progressSentence(facts: StateFacts): string {
  const { share } = facts.progress;
  return share === null ? '' : `About ${doneInWords(share, facts.progress.shareRange)}.`;
}

/** “61% of the tree is done (55% to 68%)”. */
export function doneInWords(share: number, range: readonly [number, number] | null): string {
  const spread = range === null ? '' : ` (${shareInWords(range[0])} to ${shareInWords(range[1])})`;
  return `${shareInWords(share)} of the tree is done${spread}`;
}

function asSentence(text: string): string {
  const capital = text.charAt(0).toUpperCase() + text.slice(1);
  return /[.!?]$/.test(capital) ? capital : `${capital}.`;
}

const IN_A_TABLE: Readonly<Record<Exclude<SearchState, 'settled'>, string>> = {
  waiting: 'open, waiting',
  searching: 'open, searching',
  held: 'open, held',
  spent: 'open, budget used up',
  withdrawn: 'open, withdrawn',
  broken: 'open, broken',
};

/** Verdict and state beside the mark in a table: “embeds”, “open, held”. */
export function verdictInTable(question: Pick<QuestionSummary, 'state' | 'verdict'>): string {
  return question.state === 'settled' ? question.verdict : IN_A_TABLE[question.state];
}

/** Which mark stands beside it. */
export function markOf(
  question: Pick<QuestionSummary, 'state' | 'verdict'>,
): 'embeds' | 'excluded' | 'open' | 'searching' {
  if (question.state === 'settled') return question.verdict;
  return question.state === 'searching' ? 'searching' : 'open';
}
