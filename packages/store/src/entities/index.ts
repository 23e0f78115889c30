import { allowanceEntity, apiTokenEntity, keyLinkEntity, memberEntity, personEntity } from './people.ts';
import { auditEntity, letterEntity } from './records.ts';
import { parcelEntity, searchEntity, stationEntity } from './searches.ts';
import { noteEntity, questionEntity, studyEntity } from './studies.ts';

export * from './people.ts';
export * from './records.ts';
export * from './searches.ts';
export * from './studies.ts';

export const ENTITIES = [
  personEntity,
  allowanceEntity,
  keyLinkEntity,
  apiTokenEntity,
  memberEntity,
  studyEntity,
  questionEntity,
  noteEntity,
  searchEntity,
  parcelEntity,
  stationEntity,
  letterEntity,
  auditEntity,
];
