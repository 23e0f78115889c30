/** Whether database and queue answer, and when a station was last heard. */
import { api } from '@palmette/contracts';
import { route } from '../../http/route.ts';

export const healthRoutes = [
  route({
    method: 'get',
    path: '/health',
    who: 'anyone',
    summary: '200 when database and queue answer, 503 otherwise.',
    answer: api.health,
    async run({ services, response }) {
      const health = await services.store.pool
        .health()
        .catch(() => ({ database: false, queue: false, stationHeardAt: null, stations: 0 }));
      response.setHeader('Cache-Control', 'no-store');
      response.status(health.database && health.queue ? 200 : 503).json(health);
    },
  }),
];
