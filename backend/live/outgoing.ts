import { type Socket } from 'socket.io';

/**
 * How much was sent to a browser that its machine has not yet taken, in bytes: what waits in the engine, and what the link itself holds.
 * Neither is told by socket.io, so both are read from where they are kept; `tests/live/slow.test.ts` shows that they still are.
 */
export function unsentBytes({ conn }: Pick<Socket, 'conn'>): number {
  const waiting: unknown = Reflect.get(conn, 'writeBuffer');
  const packets = Array.isArray(waiting) ? waiting : [];
  const inEngine = packets.reduce<number>((total, packet) => total + sizeOf(packet), 0);
  const held: unknown = Reflect.get(linkOf(conn) ?? {}, 'bufferedAmount');
  return inEngine + (typeof held === 'number' ? held : 0);
}

const sizeOf = (packet: unknown): number => {
  const data: unknown = typeof packet === 'object' && packet !== null ? Reflect.get(packet, 'data') : undefined;
  return typeof data === 'string' || data instanceof Uint8Array ? data.length : 0;
};

const linkOf = ({ transport }: Socket['conn']): object | undefined => {
  const link: unknown = Reflect.get(transport, 'socket');
  return typeof link === 'object' && link !== null ? link : undefined;
};

/** Ends a link at once and drops what it holds: a browser that reads nothing would not even take its farewell. */
export function cutLink({ conn }: Pick<Socket, 'conn'>): void {
  const link = linkOf(conn);
  const terminate: unknown = link && Reflect.get(link, 'terminate');
  if (link && typeof terminate === 'function') Reflect.apply(terminate, link, []);
  conn.close(true);
}
