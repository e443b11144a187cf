import http from 'node:http';
import type { AddressInfo } from 'node:net';

/** Serves a request handler over plain http on a free loopback port, for trying the stand-in over a real wire. */
export async function serveOnLoopback(
  handler: (request: Request, origin: string) => Promise<Response>,
): Promise<{ origin: string; close: () => Promise<void> }> {
  let origin = '';
  const server = http.createServer((incoming, outgoing) => {
    const method = incoming.method ?? 'GET';
    const hasBody = method === 'POST' || method === 'PUT';
    const request = new Request(origin + (incoming.url ?? '/'), {
      method,
      headers: incoming.headers as Record<string, string>,
      ...(hasBody ? { body: body(incoming), duplex: 'half' } : {}),
    } as RequestInit);
    handler(request, origin)
      .then(async (response) => {
        outgoing.writeHead(response.status, Object.fromEntries(response.headers));
        const reader = method === 'HEAD' ? null : response.body?.getReader();
        for (let part = await reader?.read(); part && !part.done; part = await reader?.read())
          outgoing.write(part.value);
        outgoing.end();
      })
      .catch((error: unknown) => outgoing.destroy(error instanceof Error ? error : new Error(String(error))));
  });
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  origin = `http://127.0.0.1:${(server.address() as AddressInfo).port}`;
  return {
    origin,
    close: () =>
      new Promise((resolve) => {
        server.closeAllConnections();
        server.close(() => resolve());
      }),
  };
}

/** Pulls, so that a handler that stops reading stops the sender. */
function body(incoming: http.IncomingMessage): ReadableStream<Uint8Array> {
  const pieces = incoming.iterator({ destroyOnReturn: false });
  return new ReadableStream(
    {
      pull: async (controller) => {
        try {
          const { done, value } = (await pieces.next()) as IteratorResult<Uint8Array, undefined>;
          if (done) controller.close();
          else controller.enqueue(value);
        } catch (error) {
          controller.error(error);
        }
      },
    },
    { highWaterMark: 0 },
  );
}
