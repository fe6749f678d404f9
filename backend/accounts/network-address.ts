import { isIPv6 } from 'node:net';

const GROUPS = 8;
const GROUPS_OF_ONE_HOLDER = 4; // a /64, of which each holder has as many addresses as they please

/**
 * What attempts from an address are counted under: an IPv4 address itself, of an IPv6 address its /64 network.
 *
 * @param address as the socket or a trusted proxy gives it
 */
export function addressHolder(address: string): string {
  const mapped = /^::ffff:(\d+\.\d+\.\d+\.\d+)$/i.exec(address)?.[1];
  if (mapped !== undefined) return mapped;
  const [bare = ''] = address.split('%');
  if (!isIPv6(bare)) return address;
  const [front = '', back = ''] = bare.toLowerCase().split('::');
  const groupsOf = (text: string): string[] => (text === '' ? [] : text.split(':'));
  const before = groupsOf(front);
  const after = bare.includes('::') ? groupsOf(back) : [];
  const between = Array.from({ length: Math.max(0, GROUPS - before.length - after.length) }, () => '0');
  const whole = [...before, ...between, ...after].map((group) => group.replace(/^0+(?=.)/, ''));
  return `${whole.slice(0, GROUPS_OF_ONE_HOLDER).join(':')}::/64`;
}
