import { existsSync, readFileSync } from 'node:fs';
import { createServer } from 'node:http';
import type { AddressInfo } from 'node:net';
import { join } from 'node:path';
import { pagePolicy } from '../../extension/app/proof/policy.ts';
import type { Recording } from './recorded.ts';
import { themes } from './themes.ts';

/** A built page on a server of its own, with what a host holds ready for it: nothing but the network of this machine is between. */
export interface Served {
  readonly url: string;
  close(): Promise<void>;
}

/** Paths of what stands for a host's messages. */
export const SERVED = { bytes: '/recorded.bytes', first: '/recorded.first' };

/** Serves the page that lies in a folder. Close it when done. */
export async function servePage({ bytes, first }: Recording, pages: string): Promise<Served> {
  const theme = themes.dark;
  const server = createServer((request, response) => {
    const send = (type: string, body: string | Uint8Array): void => {
      response.writeHead(200, { 'Content-Type': type, 'Cache-Control': 'no-store' }).end(body);
    };
    const path = request.url ?? '/';
    if (path === '/') {
      const origin = `http://${request.headers.host}`;
      return send(
        'text/html',
        `<!doctype html><html lang="en"><head><meta charset="utf-8"><title>Proof</title>
<meta http-equiv="Content-Security-Policy" content="${pagePolicy(origin, 'recorded')}">
<link rel="stylesheet" href="/theme.css"><link rel="stylesheet" href="/page.css"></head>
<body class="${theme.bodyClass}" data-worker="${origin}/worker.js"><script nonce="recorded" src="/page.js"></script></body></html>`,
      );
    }
    if (path === '/theme.css') return send('text/css', theme.css);
    if (path === SERVED.bytes) return send('application/octet-stream', bytes);
    if (path === SERVED.first && first !== undefined) {
      const { buffer, byteOffset, byteLength } = first.picture.codes;
      return send('application/octet-stream', new Uint8Array(buffer, byteOffset, byteLength));
    }
    const file = join(pages, path.slice(1));
    if (!existsSync(file)) return response.writeHead(404).end();
    send(path.endsWith('.css') ? 'text/css' : 'text/javascript', readFileSync(file));
  });
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  return {
    url: `http://127.0.0.1:${(server.address() as AddressInfo).port}/`,
    close: () =>
      new Promise((resolve) => {
        server.close(() => resolve());
        server.closeAllConnections();
      }),
  };
}
