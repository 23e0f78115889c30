/** People and what belongs to them. Every column has its type spelled out; the database makes the defaults. */
import type { Access, Role } from '@palmette/contracts';
import { EntitySchema } from 'typeorm';

export interface PersonEntity {
  id: string;
  email: string;
  name: string;
  role: Role;
  passwordHash: string | null;
  tokenVersion: number;
  active: boolean;
  lettersSettled: boolean;
  lettersSpent: boolean;
  lettersBroken: boolean;
  appearance: 'system' | 'light' | 'dark';
  seenAt: Date | null;
  createdAt: Date;
}

export const personEntity = new EntitySchema<PersonEntity>({
  name: 'person',
  columns: {
    id: { type: 'uuid', primary: true },
    email: { type: 'text' },
    name: { type: 'text' },
    role: { type: 'text' },
    passwordHash: { name: 'password_hash', type: 'text', nullable: true },
    tokenVersion: { name: 'token_version', type: 'integer', default: 0 },
    active: { type: 'boolean', default: true },
    lettersSettled: { name: 'letters_settled', type: 'boolean', default: true },
    lettersSpent: { name: 'letters_spent', type: 'boolean', default: true },
    lettersBroken: { name: 'letters_broken', type: 'boolean', default: true },
    appearance: { type: 'text', default: 'system' },
    seenAt: { name: 'seen_at', type: 'timestamptz', nullable: true },
    createdAt: { name: 'created_at', type: 'timestamptz', default: () => 'now()' },
  },
});

export interface AllowanceEntity {
  personId: string;
  workers: number;
  cpuMsPerDay: string;
}

export const allowanceEntity = new EntitySchema<AllowanceEntity>({
  name: 'allowance',
  columns: {
    personId: { name: 'person_id', type: 'uuid', primary: true },
    workers: { type: 'integer' },
    cpuMsPerDay: { name: 'cpu_ms_per_day', type: 'bigint' },
  },
});

export interface KeyLinkEntity {
  keySha256: string;
  purpose: 'invitation' | 'password';
  personId: string;
  createdAt: Date;
  expiresAt: Date;
  usedAt: Date | null;
}

export const keyLinkEntity = new EntitySchema<KeyLinkEntity>({
  name: 'key_link',
  columns: {
    keySha256: { name: 'key_sha256', type: 'text', primary: true },
    purpose: { type: 'text' },
    personId: { name: 'person_id', type: 'uuid' },
    createdAt: { name: 'created_at', type: 'timestamptz', default: () => 'now()' },
    expiresAt: { name: 'expires_at', type: 'timestamptz' },
    usedAt: { name: 'used_at', type: 'timestamptz', nullable: true },
  },
});

export interface ApiTokenEntity {
  id: string;
  personId: string;
  name: string;
  tokenSha256: string;
  createdAt: Date;
  lastUsedAt: Date | null;
  revokedAt: Date | null;
}

export const apiTokenEntity = new EntitySchema<ApiTokenEntity>({
  name: 'api_token',
  columns: {
    id: { type: 'uuid', primary: true },
    personId: { name: 'person_id', type: 'uuid' },
    name: { type: 'text' },
    tokenSha256: { name: 'token_sha256', type: 'text' },
    createdAt: { name: 'created_at', type: 'timestamptz', default: () => 'now()' },
    lastUsedAt: { name: 'last_used_at', type: 'timestamptz', nullable: true },
    revokedAt: { name: 'revoked_at', type: 'timestamptz', nullable: true },
  },
});

export interface MemberEntity {
  studyId: string;
  personId: string;
  access: Access;
  letters: boolean;
}

export const memberEntity = new EntitySchema<MemberEntity>({
  name: 'member',
  columns: {
    studyId: { name: 'study_id', type: 'uuid', primary: true },
    personId: { name: 'person_id', type: 'uuid', primary: true },
    access: { type: 'text' },
    letters: { type: 'boolean', default: true },
  },
});
