/** The letters that carry a link for one person's account: an invitation, a new password. */
import type { Letter } from './letter.ts';

/** @param link the whole address that opens the invitation; used once */
export function invitationLetter(to: { readonly name: string; readonly by: string; readonly link: string }): Letter {
  return {
    subject: 'Your invitation to Palmette',
    body: `${to.name}, ${to.by} invites you to Palmette, where a group settles and shares questions about lattices that embed in Z^n.\n\nChoose a password and begin here:\n${to.link}\n\nThe link can be used once and ends after 14 days.\n`,
  };
}

/** @param link the whole address that opens the form for a new password; used once */
export function passwordLetter(to: { readonly name: string; readonly link: string }): Letter {
  return {
    subject: 'A new password for Palmette',
    body: `${to.name}, a new password was asked for at your account.\n\nChoose it here:\n${to.link}\n\nThe link can be used once and ends after an hour. If it was not you who asked, do nothing: the old password goes on working.\n`,
  };
}
