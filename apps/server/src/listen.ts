/** Listens on the wanted port, or on the next free one. */
import type { Express } from 'express';
import { createServer, type Server } from 'node:http';
import type { AddressInfo } from 'node:net';

const TRIED_PORTS = 50;

export async function listen(
  app: Express,
  host: string,
  wanted: number,
): Promise<{ readonly server: Server; readonly port: number }> {
  for (let port = wanted; ; port += 1) {
    const server = createServer(app);
    try {
      await new Promise<void>((resolve, reject) => {
        server.once('error', reject);
        server.listen(port, host, resolve);
      });
      return { server, port: (server.address() as AddressInfo).port };
    } catch (error) {
      if ((error as NodeJS.ErrnoException).code !== 'EADDRINUSE' || port >= wanted + TRIED_PORTS) throw error;
    }
  }
}
