/** Roles of an account and access to a study, each with what it allows. */
import type { Access, Role } from '@palmette/contracts';

export const ROLE_WORDS: Readonly<Record<Role, { readonly word: string; readonly allows: string }>> = {
  admin: { word: 'admin', allows: 'asks, invites people, sets allowances, sees to the pool' },
  researcher: { word: 'researcher', allows: 'makes studies and settles questions' },
  reader: { word: 'reader', allows: 'looks, writes notes and downloads' },
};

export const ACCESS_WORDS: Readonly<Record<Access, { readonly word: string; readonly allows: string }>> = {
  lead: { word: 'lead', allows: 'shares the study and asks in it' },
  coauthor: { word: 'coauthor', allows: 'asks in the study' },
  reader: { word: 'reader', allows: 'looks, writes notes and downloads' },
};
