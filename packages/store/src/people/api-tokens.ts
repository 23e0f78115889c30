/** Tokens for scripts: shown once by the server, kept here as a hash. */
import { randomUUID } from 'node:crypto';
import type { ApiToken } from '@palmette/contracts';
import { IsNull } from 'typeorm';
import type { Database } from '../database.ts';
import type { PeopleStore } from '../door.ts';
import { apiTokenEntity, personEntity, type ApiTokenEntity } from '../entities/index.ts';
import { isId, personRow } from './person-row.ts';

type Tokens = Pick<PeopleStore, 'makeToken' | 'tokens' | 'revokeToken' | 'byToken'>;

export function apiTokens(database: Database): Tokens {
  const repository = () => database.source.getRepository(apiTokenEntity);
  return {
    async makeToken(personId, name, tokenSha256) {
      const id = randomUUID();
      await repository().insert({ id, personId, name, tokenSha256 });
      return shown(await repository().findOneByOrFail({ id }));
    },

    async tokens(personId) {
      const found = await repository().find({
        where: { personId, revokedAt: IsNull() },
        order: { createdAt: 'DESC', id: 'ASC' },
      });
      return found.map(shown);
    },

    async revokeToken(personId, tokenId) {
      if (!isId(tokenId)) return false;
      const revoked = await database.change(
        'update api_token set revoked_at = now() where id = $1 and person_id = $2 and revoked_at is null',
        [tokenId, personId],
      );
      return revoked > 0;
    },

    async byToken(tokenSha256) {
      const [token] = await database.query<{ person_id: string }>(
        `select t.person_id from api_token t join person p on p.id = t.person_id
         where t.token_sha256 = $1 and t.revoked_at is null and p.active`,
        [tokenSha256],
      );
      if (token === undefined) return null;
      await database.change(
        `update api_token set last_used_at = now()
         where token_sha256 = $1 and (last_used_at is null or last_used_at < now() - interval '1 minute')`,
        [tokenSha256],
      );
      return personRow(await database.source.getRepository(personEntity).findOneByOrFail({ id: token.person_id }));
    },
  };
}

function shown({ id, name, createdAt, lastUsedAt }: ApiTokenEntity): ApiToken {
  return { id, name, createdAt: createdAt.toISOString(), lastUsedAt: lastUsedAt?.toISOString() ?? null };
}
