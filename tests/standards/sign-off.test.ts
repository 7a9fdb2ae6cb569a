import { describe, expect, it } from 'vitest';
import { verifyTrail } from '@/domain/trail';
import { buildTrailBody, nodeChecks, rechain, seal } from '../support/sealed-trail';

describe('electronic records and signatures', () => {
  it('a signature can not be cut out and put on another record (21 CFR 11.70)', async () => {
    const body = buildTrailBody(5);
    const [, from, , to] = body.entries;
    Object.assign(to!, { signature: from!.signature, key: from!.key });
    expect(await verifyTrail(seal(rechain(body)), nodeChecks)).toMatchObject({
      ok: false,
      brokenAt: 'entry 4',
    });
  });

  it('no entry can be changed or taken out afterwards unseen (21 CFR 11.10(e))', async () => {
    const changed = buildTrailBody(5);
    changed.entries[2]!.recorded.data.clearance = '0.049';
    expect(await verifyTrail(seal(rechain(changed)), nodeChecks)).toMatchObject({
      ok: false,
      brokenAt: 'entry 3',
    });
    const missing = buildTrailBody(5);
    missing.entries.splice(2, 1);
    expect(await verifyTrail(seal(rechain(missing)), nodeChecks)).toMatchObject({
      ok: false,
      brokenAt: 'entry 3',
    });
  });
});
