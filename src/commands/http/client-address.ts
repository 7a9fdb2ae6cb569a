import { isIP, isIPv6, type BlockList } from 'node:net';

/**
 * The address of whoever sent a request: the socket's own, or, when that is a trusted reverse proxy,
 * the last address in X-Forwarded-For that is not one too. What stands further left is hearsay.
 */
export function clientAddress(
  socketAddress: string | undefined,
  forwardedFor: string | undefined,
  trustedProxies: BlockList,
): string {
  let address = plain(socketAddress ?? '');
  const hops = (forwardedFor ?? '')
    .split(',')
    .map((hop) => plain(hop.trim()))
    .filter((hop) => hop !== '');
  while (isTrusted(address, trustedProxies)) {
    const previous = hops.pop();
    if (previous === undefined || isIP(previous) === 0) break;
    address = previous;
  }
  return address;
}

/** An IPv4 address that came over an IPv6 socket is the same address. */
function plain(address: string): string {
  return address.replace(/^::ffff:(?=\d+\.)/i, '');
}

function isTrusted(address: string, trustedProxies: BlockList): boolean {
  return address !== '' && trustedProxies.check(address, isIPv6(address) ? 'ipv6' : 'ipv4');
}
