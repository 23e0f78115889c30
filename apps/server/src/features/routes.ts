/** Every route of the API. */
import type { Route } from '../http/route.ts';
import { accountRoutes } from './account/account-routes.ts';
import { healthRoutes } from './health/health-routes.ts';
import { invitationRoutes } from './invitations/invitation-routes.ts';
import { peopleRoutes } from './people/people-routes.ts';
import { poolRoutes } from './pool/pool-routes.ts';
import { questionRoutes } from './questions/question-routes.ts';
import { sessionRoutes } from './session/session-routes.ts';
import { studyRoutes } from './studies/study-routes.ts';

export const ROUTES: readonly Route[] = [
  ...sessionRoutes,
  ...accountRoutes,
  ...invitationRoutes,
  ...studyRoutes,
  ...questionRoutes,
  ...poolRoutes,
  ...peopleRoutes,
  ...healthRoutes,
];
