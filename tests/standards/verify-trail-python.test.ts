import { spawnSync } from 'node:child_process';
import { describe, expect, it } from 'vitest';

/*
 * The verifier in Python has its own cryptography, so it is held against published answers; they stand in
 * verify_trail_answers.py with their sources (RFC 8032, RFC 6979, RFC 8785, RFC 4648).
 */

const hasPython = spawnSync('python3', ['--version']).status === 0;

describe('the verifier in Python', () => {
  it.skipIf(!hasPython)(
    hasPython
      ? 'gives the published answers, and says of hostile files what they are'
      : 'is not checked: there is no python3 on this machine',
    () => {
      const done = spawnSync('python3', ['-B', 'tests/standards/verify_trail_answers.py'], {
        encoding: 'utf8',
        timeout: 60_000,
      });
      expect(done.stderr).toMatch(/Ran \d+ tests in .*\n\nOK\n$/);
      expect(done.status).toBe(0);
    },
    60_000,
  );
});
