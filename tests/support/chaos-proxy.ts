import { type AddressInfo, connect, createServer, type Socket } from 'node:net';

/** A TCP proxy on this machine that can cut, stall and refuse. */
export interface ChaosProxy {
  readonly port: number;
  /** Cuts every connection at once (RST), and says how many there were. */
  readonly cut: () => number;
  /** Cuts each connection after it has carried so many bytes towards the server; undefined for never. */
  readonly cutAfterBytes: (bytes: number | undefined) => void;
  /** Holds back everything in both directions until it is called with false: a link that is open and carries nothing. */
  readonly stall: (isStalled: boolean) => void;
  /** Where new connections go from now on, as when the server has come back on another port. */
  readonly leadTo: (port: number) => void;
  readonly close: () => Promise<void>;
}

/**
 * Starts a proxy.
 *
 * @param target port of the server on 127.0.0.1
 */
export async function startChaosProxy(target: number): Promise<ChaosProxy> {
  let leadsTo = target;
  let mostBytes: number | undefined;
  let isStalled = false;
  const links = new Set<readonly [Socket, Socket]>();
  const server = createServer((client) => {
    const upstream = connect(leadsTo, '127.0.0.1');
    const link = [client, upstream] as const;
    links.add(link);
    let carried = 0;
    const end = (): void => {
      if (!links.delete(link)) return;
      for (const side of link) side.resetAndDestroy();
    };
    client.on('data', (chunk) => {
      carried += chunk.length;
      if (mostBytes !== undefined && carried > mostBytes) end();
      else upstream.write(chunk);
    });
    upstream.on('data', (chunk) => client.write(chunk));
    for (const side of link) {
      side.on('error', end);
      side.on('close', end);
      if (isStalled) side.pause();
    }
  });
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  const cut = (): number => {
    const count = links.size;
    for (const link of links) for (const side of link) side.resetAndDestroy();
    links.clear();
    return count;
  };
  return {
    port: (server.address() as AddressInfo).port,
    cut,
    cutAfterBytes: (bytes) => (mostBytes = bytes),
    stall: (stalled) => {
      isStalled = stalled;
      for (const link of links) for (const side of link) side[stalled ? 'pause' : 'resume']();
    },
    leadTo: (port) => (leadsTo = port),
    close: async () => {
      cut();
      await new Promise((resolve) => server.close(resolve));
    },
  };
}
