export { endingLetter, type EndingFacts, type Letter, type LetterPlace } from './letter.ts';
export { invitationLetter, passwordLetter } from './letter-account.ts';
