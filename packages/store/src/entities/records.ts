/** Letters and the audit trail. */
import { EntitySchema } from 'typeorm';

export interface LetterEntity {
  id: string;
  personId: string | null;
  searchId: string | null;
  ending: string;
  endingNo: number;
  recipient: string;
  subject: string;
  body: string;
  messageId: string;
}

export const letterEntity = new EntitySchema<LetterEntity>({
  name: 'letter',
  columns: {
    id: { type: 'uuid', primary: true },
    personId: { name: 'person_id', type: 'uuid', nullable: true },
    searchId: { name: 'search_id', type: 'uuid', nullable: true },
    ending: { type: 'text' },
    endingNo: { name: 'ending_no', type: 'integer', default: 1 },
    recipient: { type: 'text' },
    subject: { type: 'text' },
    body: { type: 'text' },
    messageId: { name: 'message_id', type: 'text' },
  },
});

export interface AuditEntity {
  id: string;
  personId: string | null;
  action: string;
  subject: string;
  detail: string;
}

export const auditEntity = new EntitySchema<AuditEntity>({
  name: 'audit',
  columns: {
    id: { type: 'bigint', primary: true, generated: 'increment' },
    personId: { name: 'person_id', type: 'uuid', nullable: true },
    action: { type: 'text' },
    subject: { type: 'text' },
    detail: { type: 'text', default: '' },
  },
});
