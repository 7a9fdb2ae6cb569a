import * as z from 'zod';
import { erasePersonalData } from '@/server/erasure';
import { line, nothing } from '@/server/fields';
import { endpoint } from '@/server/http';
import { IDENTITY_FIELDS } from '@/server/job-identity';

const hash = z.string().regex(/^[0-9a-f]{64}$/, 'has to be the hash of a photograph');

export const POST = endpoint(
  {
    method: 'POST',
    path: '/api/jobs/{id}/erase',
    summary: 'Erase personal fields and marked photographs of a job that has ended, for good',
    who: ['owner'],
    body: z.strictObject({
      fields: z.array(z.enum(IDENTITY_FIELDS)).max(IDENTITY_FIELDS.length),
      photographs: z.array(hash).max(200),
      reason: line(500),
    }),
    answer: nothing,
  },
  async ({ app, actor, params, body }) => {
    await erasePersonalData(app, actor, params.id ?? '', body);
    return { ok: true as const };
  },
);
