import { describe, expect, it } from 'vitest';
import { isAllowedHost } from './allowed-host';

describe('isAllowedHost', () => {
  it.each([
    'workshop.example',
    'WORKSHOP.example',
    'workshop.example:443',
    'localhost:4321',
    '127.0.0.1:4321',
    '[::1]:4321',
  ])('takes %s for our own', (host) => {
    expect(isAllowedHost(host, 'https://workshop.example', 4321)).toBe(true);
  });

  it.each([
    undefined,
    '',
    'other.example',
    'workshop.example.other.example',
    'workshop.example:8443',
    'localhost',
    'localhost:4322',
    'other.example:4321',
    'workshop.example/..',
    'user@workshop.example',
    'workshop.example\\other.example',
    'localhost:4321:4321',
  ])('refuses %s', (host) => {
    expect(isAllowedHost(host, 'https://workshop.example', 4321)).toBe(false);
  });
});
