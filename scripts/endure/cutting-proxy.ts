import { connect, createServer, type Socket } from 'node:net';

/** A wire between clients and a server that can be cut. */
export interface CuttingProxy {
  port: number;
  /** Ends every connection at once, in both directions, as a network that fails does. */
  cut(): number;
  /** Refuses every connection until it is opened again. */
  close(): void;
  open(): void;
  end(): Promise<void>;
}

/** Passes TCP on from a port of its own to `target` on the loopback address. */
export async function cuttingProxy(target: number): Promise<CuttingProxy> {
  const sockets = new Set<Socket>();
  let closed = false;
  const server = createServer((client) => {
    if (closed) return void client.destroy();
    const upstream = connect(target, '127.0.0.1');
    const both = [client, upstream];
    for (const socket of both) {
      sockets.add(socket);
      socket.setNoDelay(true);
      socket.on('error', () => undefined);
      socket.on('close', () => {
        sockets.delete(socket);
        both.forEach((other) => other.destroy());
      });
    }
    client.pipe(upstream);
    upstream.pipe(client);
  });
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  const cut = () => {
    const count = sockets.size;
    for (const socket of sockets) socket.resetAndDestroy();
    return count / 2;
  };
  return {
    port: (server.address() as { port: number }).port,
    cut,
    close: () => {
      closed = true;
      cut();
    },
    open: () => void (closed = false),
    end: () => new Promise((resolve) => (cut(), server.close(() => resolve()))),
  };
}
