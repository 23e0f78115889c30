/** The Express application: headers, API, the built client, faults. */
import { existsSync } from 'node:fs';
import { join } from 'node:path';
import compression from 'compression';
import cookieParser from 'cookie-parser';
import express, { type Express } from 'express';
import helmet from 'helmet';
import type { Logger } from 'pino';
import { pinoHttp } from 'pino-http';
import { Refusal } from '@palmette/contracts';
import { openApiDocument } from './features/openapi/openapi-document.ts';
import { ROUTES } from './features/routes.ts';
import { faultHandler } from './http/faults.ts';
import { mountRoutes } from './http/mount.ts';
import type { Services } from './services.ts';

export const VERSION = '0.1.0';

export function makeApp(services: Services, log: Logger): Express {
  const app = express();
  app.disable('x-powered-by');
  app.set('trust proxy', 'loopback');
  app.use(
    helmet({
      contentSecurityPolicy: {
        useDefaults: false,
        directives: {
          defaultSrc: ["'self'"],
          baseUri: ["'self'"],
          connectSrc: ["'self'"],
          fontSrc: ["'self'"],
          formAction: ["'self'"],
          frameAncestors: ["'none'"],
          imgSrc: ["'self'", 'data:', 'blob:'],
          objectSrc: ["'none'"],
          scriptSrc: ["'self'"],
          styleSrc: ["'self'"],
          // the component library writes its styles into the page
          styleSrcElem: ["'self'", "'unsafe-inline'"],
          styleSrcAttr: ["'unsafe-inline'"],
          workerSrc: ["'self'"],
        },
      },
      strictTransportSecurity: services.config.secureCookie,
    }),
  );
  app.use(compression());
  app.use(
    pinoHttp({
      logger: log,
      redact: ['req.headers.cookie', 'req.headers.authorization', 'res.headers["set-cookie"]'],
      autoLogging: { ignore: (request) => request.method === 'GET' },
    }),
  );
  app.use(cookieParser());
  const document = openApiDocument(ROUTES, VERSION);
  app.get('/api/openapi.json', (_request, response) => void response.json(document));
  app.use('/api', mountRoutes(services, ROUTES));
  app.use('/api', () => {
    throw new Refusal('not-found', 'there is nothing at this address');
  });
  serveClient(app, services.config.webFolder);
  app.use(faultHandler(log));
  return app;
}

function serveClient(app: Express, folder: string): void {
  const page = join(folder, 'index.html');
  if (!existsSync(page)) return;
  app.use('/assets', express.static(join(folder, 'assets'), { immutable: true, maxAge: '365d', fallthrough: false }));
  app.use(express.static(folder, { index: false, maxAge: 0 }));
  app.get('/{*path}', (_request, response) => {
    response.setHeader('Cache-Control', 'no-cache');
    response.sendFile(page);
  });
}
