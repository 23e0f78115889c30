/** Studies, what is asked in them and what is said about it. */
import { EntitySchema } from 'typeorm';

export interface StudyEntity {
  id: string;
  title: string;
  createdBy: string;
  createdAt: Date;
  changedAt: Date;
  deletedAt: Date | null;
}

export const studyEntity = new EntitySchema<StudyEntity>({
  name: 'study',
  columns: {
    id: { type: 'uuid', primary: true },
    title: { type: 'text' },
    createdBy: { name: 'created_by', type: 'uuid' },
    createdAt: { name: 'created_at', type: 'timestamptz', default: () => 'now()' },
    changedAt: { name: 'changed_at', type: 'timestamptz', default: () => 'now()' },
    deletedAt: { name: 'deleted_at', type: 'timestamptz', nullable: true },
  },
});

export interface QuestionEntity {
  id: string;
  studyId: string;
  askedBy: string;
  title: string | null;
  document: string;
  sourceKind: string;
  sourceLabel: string;
  target: string;
  scope: string;
  createdAt: Date;
}

export const questionEntity = new EntitySchema<QuestionEntity>({
  name: 'question',
  columns: {
    id: { type: 'uuid', primary: true },
    studyId: { name: 'study_id', type: 'uuid' },
    askedBy: { name: 'asked_by', type: 'uuid' },
    title: { type: 'text', nullable: true },
    document: { type: 'text' },
    sourceKind: { name: 'source_kind', type: 'text' },
    sourceLabel: { name: 'source_label', type: 'text' },
    target: { type: 'text' },
    scope: { type: 'text' },
    createdAt: { name: 'created_at', type: 'timestamptz', default: () => 'now()' },
  },
});

export interface NoteEntity {
  id: string;
  studyId: string;
  questionId: string | null;
  personId: string;
  text: string;
  at: Date;
}

export const noteEntity = new EntitySchema<NoteEntity>({
  name: 'note',
  columns: {
    id: { type: 'uuid', primary: true },
    studyId: { name: 'study_id', type: 'uuid' },
    questionId: { name: 'question_id', type: 'uuid', nullable: true },
    personId: { name: 'person_id', type: 'uuid' },
    text: { type: 'text' },
    at: { type: 'timestamptz', default: () => 'now()' },
  },
});
