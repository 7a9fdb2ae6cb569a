import * as z from 'zod';
import { SECOND_UNITS } from '@/domain/second-unit';
import { certificate, toolAnswer } from '@/server/answers';
import { line, nothing, role, zone } from '@/server/fields';
import { endpoint } from '@/server/http';
import { getWorkshopView, setWorkshop } from '@/server/workshop';

export const GET = endpoint(
  {
    method: 'GET',
    path: '/api/workshop',
    summary: 'What a tablet or a page judges by: people, tools, the zone and the workshop’s public keys',
    who: 'session or tablet',
    answer: z.strictObject({
      seq: z.int(),
      restoredAt: z.iso.datetime({ offset: false }).nullable(),
      name: z.string(),
      zone: z.string(),
      people: z.array(
        z.strictObject({
          id: z.string(),
          name: z.string(),
          roles: z.array(role),
          active: z.boolean(),
          hasPin: z.boolean(),
          certificate: certificate.nullable(),
          authorisedUntil: z.string().nullable(),
        }),
      ),
      tools: z.array(toolAnswer),
      sealingKey: z.strictObject({ id: z.string(), publicKey: z.string() }),
      headKey: z.string(),
      secondUnits: z.enum(SECOND_UNITS),
    }),
  },
  async ({ app, asker }) => getWorkshopView(app.db, asker, app.keys),
);

export const PUT = endpoint(
  {
    method: 'PUT',
    path: '/api/workshop',
    summary: 'Name the workshop and its time zone',
    who: ['owner'],
    body: z.strictObject({ name: line(120), zone }),
    answer: nothing,
  },
  async ({ app, actor, body }) => {
    await app.db.transaction().execute((trx) => setWorkshop(trx, actor, body, app));
    return { ok: true as const };
  },
);
