/** Sessions, invitations, passwords and one's own account. */
import type { Account, ApiToken, ApiTokenMade, Page, Person } from '@palmette/contracts';
import { request } from './client.ts';

export interface KeyInfo {
  readonly purpose: 'invitation' | 'password';
  readonly email: string;
  readonly name: string;
}

export type AccountChange = Partial<Pick<Account, 'letters' | 'appearance'>> & { name?: string };

export const signIn = (email: string, password: string) =>
  request<{ person: Person }>('POST', '/session', { body: { email, password } });
export const signOut = () => request<void>('DELETE', '/session');
export const whoAmI = () => request<{ person: Person }>('GET', '/session');

export const keyInfo = (key: string) => request<KeyInfo>('GET', `/keys/${encodeURIComponent(key)}`);
export const acceptInvitation = (body: { key: string; name?: string; password: string }) =>
  request<void>('POST', '/invitations/accept', { body });
export const forgotPassword = (email: string) => request<void>('POST', '/password/forgotten', { body: { email } });
export const resetPassword = (body: { key: string; password: string }) =>
  request<void>('POST', '/password/reset', { body });

export const getAccount = (signal?: AbortSignal) => request<Account>('GET', '/account', signal ? { signal } : {});
export const changeAccount = (body: AccountChange) => request<Account>('PATCH', '/account', { body });
export const changePassword = (current: string, next: string) =>
  request<void>('POST', '/account/password', { body: { current, next } });

export const listTokens = (signal?: AbortSignal) =>
  request<Page<ApiToken>>('GET', '/account/tokens', signal ? { signal } : {});
export const makeToken = (name: string) => request<ApiTokenMade>('POST', '/account/tokens', { body: { name } });
export const deleteToken = (id: string) => request<void>('DELETE', `/account/tokens/${encodeURIComponent(id)}`);
