import * as z from 'zod';
import { deviceAnswer } from '@/server/answers';
import { enrolDevice, listDevices } from '@/server/devices';
import { cursor, line, secret, uuid } from '@/server/fields';
import { endpoint } from '@/server/http';

export const GET = endpoint(
  {
    method: 'GET',
    path: '/api/devices',
    summary: 'Every tablet of the workshop, the newest first, a page at a time',
    who: ['supervisor', 'quality lead', 'auditor', 'owner'],
    query: z.strictObject({ cursor }),
    answer: z.strictObject({ devices: z.array(deviceAnswer), cursor: z.string().optional() }),
  },
  async ({ app, actor, query }) => listDevices(app.db, actor, query),
);

export const POST = endpoint(
  {
    method: 'POST',
    path: '/api/devices',
    summary: 'Enrol this browser as a tablet; its credential is answered this once',
    who: 'session',
    /** `credential`: the one that the tablet had, if a restored server has forgotten the tablet. */
    body: z.strictObject({ id: uuid, name: line(60), credential: secret.optional() }),
    answer: z.strictObject({ id: z.string(), credential: z.string() }),
    status: 201,
  },
  async ({ app, actor, body }) => {
    const { device, credential } = await app.db
      .transaction()
      .execute((trx) => enrolDevice(trx, actor, body, app));
    return { id: device.id, credential };
  },
);
