/**
 * The letter about an ending. The subject is the verdict; the body says what holds, on which ground, what it cost and
 * where to look. An open search says first that it is not a no.
 */
import type { Verdict } from '@palmette/contracts';
import { groundInShort } from './grounds.ts';
import { cpuTimeInWords, momentInWords } from './letter-time.ts';
import { disagreementIn, refusalIn } from './states.ts';

export interface Letter {
  readonly subject: string;
  readonly body: string;
}

/** What is known about a search that has ended. `startedAt` is ISO 8601; `cpuMs` is CPU time in milliseconds. */
export interface EndingFacts {
  readonly ending: 'settled' | 'spent' | 'broken';
  readonly person: { readonly name: string };
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
}

export interface LetterPlace {
  /** Address of the product without a slash at the end. */
  readonly publicUrl: string;
  /** IANA name of the zone in which times are written. */
  readonly timeZone: string;
}

export function endingLetter(facts: EndingFacts, place: LetterPlace): Letter {
  const parts = { settled, spent, broken }[facts.ending](facts, place);
  const { title, studyTitle } = facts.question;
  const named = title === null || title === '' ? '' : `“${title}”,`;
  return {
    subject: `${parts.subject}: ${facts.question.sourceLabel}`,
    body: [
      ...parts.paragraphs,
      `${named === '' ? 'In' : `${named} in`} the study “${studyTitle}”:\n${place.publicUrl}/questions/${facts.question.id}`,
      `You get this because letters are on for ${facts.ending} searches; change it on your account page:\n${place.publicUrl}/account`,
      '',
    ].join('\n\n'),
  };
}

interface Parts {
  readonly subject: string;
  readonly paragraphs: readonly string[];
}

function settled(facts: EndingFacts, place: LetterPlace): Parts {
  const ground = facts.ground === null ? '' : ` Ground: ${groundInShort(facts.ground)}; checked.`;
  return {
    subject: verdictInShort(facts),
    paragraphs: [
      `${begun(facts, place)} is settled. ${claim(facts)}${ground} ${cpuTimeInWords(facts.cpuMs)} of CPU time.`,
    ],
  };
}

function spent(facts: EndingFacts, place: LetterPlace): Parts {
  const memory = facts.reason?.includes('memory') === true;
  return {
    subject: memory ? 'Open, memory used up' : 'Open, budget used up',
    paragraphs: [
      `This is not a no. ${begun(facts, place)} stopped before it was done: ${sentence(facts.reason ?? 'its budget of CPU time is used up')} Nothing can be concluded.`,
      `${cpuTimeInWords(facts.cpuMs)} of CPU time. What was found is kept; with more budget the search goes on from here.`,
    ],
  };
}

function broken(facts: EndingFacts, place: LetterPlace): Parts {
  const refusal = refusalIn(facts.reason);
  if (refusal !== null) {
    return {
      subject: 'Refused',
      paragraphs: [
        `${begun(facts, place)} cannot be answered as it was asked: ${sentence(refusal.message)}`,
        'Nothing was searched and nothing can be concluded. Restate the question with this mended.',
      ],
    };
  }
  const disagreement = disagreementIn(facts.reason);
  if (disagreement !== null) {
    return {
      subject: 'Broken, two methods disagree',
      paragraphs: [
        `${begun(facts, place)} is broken: two methods disagree, ${sentence(disagreement)}`,
        `One of them is wrong, which is a fault of Palmette and no answer: no verdict is shown. Both results are kept. ${cpuTimeInWords(facts.cpuMs)} of CPU time.`,
      ],
    };
  }
  return {
    subject: 'Broken',
    paragraphs: [
      `${begun(facts, place)} is broken: ${sentence(facts.reason ?? 'no reason was recorded')}`,
      `This is a fault, not an answer: no verdict is shown. What was found is kept. ${cpuTimeInWords(facts.cpuMs)} of CPU time.`,
    ],
  };
}

/** Not “that you started”: members of the study get the letter too. */
function begun(facts: EndingFacts, place: LetterPlace): string {
  return `The search that was started ${momentInWords(facts.startedAt, place.timeZone)}`;
}

/** “Embeds in Z^9”, “Excluded from Z^8”, “Excluded from every Z^n”. */
function verdictInShort({ verdict, dimension }: EndingFacts): string {
  if (verdict === 'open') return 'Open';
  if (verdict === 'embeds') return dimension === null ? 'Embeds in some Z^n' : `Embeds in Z^${dimension}`;
  return dimension === null ? 'Excluded from every Z^n' : `Excluded from Z^${dimension}`;
}

function claim(facts: EndingFacts): string {
  const short = verdictInShort(facts);
  if (facts.verdict !== 'embeds') return `${short}.`;
  if (!facts.complete) return `${short}. One embedding was found; others were not looked for.`;
  return `${short}, ${facts.orbits === '1' ? 'one orbit' : `${facts.orbits} orbits`}, list complete.`;
}

function sentence(text: string): string {
  return /[.!?]$/.test(text) ? text : `${text}.`;
}
