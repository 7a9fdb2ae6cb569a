import { BlockList } from 'node:net';
import { describe, expect, it } from 'vitest';
import { clientAddress } from './client-address';

const nobody = new BlockList();
const proxies = new BlockList();
proxies.addSubnet('10.0.0.0', 8);
proxies.addAddress('::1', 'ipv6');

describe('clientAddress', () => {
  it('takes the address of the socket when no proxy is trusted, whatever the client says of itself', () => {
    expect(clientAddress('203.0.113.9', '198.51.100.1', nobody)).toBe('203.0.113.9');
  });

  it('takes the address that a trusted proxy saw', () => {
    expect(clientAddress('10.0.0.2', '198.51.100.1', proxies)).toBe('198.51.100.1');
    expect(clientAddress('::1', '198.51.100.1', proxies)).toBe('198.51.100.1');
  });

  it('does not believe what stood in the header before the first trusted proxy wrote in it', () => {
    expect(clientAddress('10.0.0.2', '192.0.2.66, 198.51.100.1, 10.0.0.3', proxies)).toBe('198.51.100.1');
  });

  it('ignores the header of a client that is no trusted proxy', () => {
    expect(clientAddress('203.0.113.9', '198.51.100.1', proxies)).toBe('203.0.113.9');
  });

  it('stays with the proxy when the proxy names nobody, or no address', () => {
    expect(clientAddress('10.0.0.2', undefined, proxies)).toBe('10.0.0.2');
    expect(clientAddress('10.0.0.2', 'unknown', proxies)).toBe('10.0.0.2');
    expect(clientAddress('10.0.0.2', '198.51.100.1, <b>', proxies)).toBe('10.0.0.2');
  });

  it('reads an IPv4 address that came over an IPv6 socket as itself', () => {
    expect(clientAddress('::ffff:203.0.113.9', undefined, nobody)).toBe('203.0.113.9');
    expect(clientAddress('::ffff:10.0.0.2', '198.51.100.1', proxies)).toBe('198.51.100.1');
  });
});
