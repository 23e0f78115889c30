/**
 * What the queue is made of. These rows are read and written by SQL of their own (packages/store/src/work), where every
 * lock and every guard can be seen; the entities say what the columns are and serve plain inserts.
 */
import type { SearchPhase, SearchState, Verdict } from '@palmette/contracts';
import { EntitySchema } from 'typeorm';

export interface SearchEntity {
  id: string;
  questionId: string;
  personId: string;
  state: SearchState;
  phase: SearchPhase | null;
  verdict: Verdict;
  budgetCpuMs: string | null;
  cpuMs: string;
}

export const searchEntity = new EntitySchema<SearchEntity>({
  name: 'search',
  columns: {
    id: { type: 'uuid', primary: true },
    questionId: { name: 'question_id', type: 'uuid' },
    personId: { name: 'person_id', type: 'uuid' },
    state: { type: 'text', default: 'waiting' },
    phase: { type: 'text', nullable: true },
    verdict: { type: 'text', default: 'open' },
    budgetCpuMs: { name: 'budget_cpu_ms', type: 'bigint', nullable: true },
    cpuMs: { name: 'cpu_ms', type: 'bigint', default: 0 },
  },
});

export interface ParcelEntity {
  id: string;
  searchId: string;
  phase: SearchPhase;
  stage: number;
  fromAddress: number[];
  toAddress: number[] | null;
  share: number;
  methodRevision: number;
}

export const parcelEntity = new EntitySchema<ParcelEntity>({
  name: 'parcel',
  columns: {
    id: { type: 'bigint', primary: true, generated: 'increment' },
    searchId: { name: 'search_id', type: 'uuid' },
    phase: { type: 'text' },
    stage: { type: 'integer' },
    fromAddress: { name: 'from_address', type: 'bigint', array: true },
    toAddress: { name: 'to_address', type: 'bigint', array: true, nullable: true },
    share: { type: 'double precision', default: 0 },
    methodRevision: { name: 'method_revision', type: 'integer', default: 1 },
  },
});

export interface StationEntity {
  id: string;
  name: string;
  version: string;
  workers: number;
  standBy: boolean;
}

export const stationEntity = new EntitySchema<StationEntity>({
  name: 'station',
  columns: {
    id: { type: 'uuid', primary: true },
    name: { type: 'text' },
    version: { type: 'text' },
    workers: { type: 'integer' },
    standBy: { name: 'stand_by', type: 'boolean', default: false },
  },
});
