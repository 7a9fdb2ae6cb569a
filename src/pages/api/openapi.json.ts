import * as z from 'zod';
import { endpoint } from '@/server/http';
import { openApiDocument } from '@/server/openapi';

// Loading every route is what makes the list of operations whole.
import.meta.glob(['./**/*.ts', '!./openapi.json.ts'], { eager: true });

export const GET = endpoint(
  {
    method: 'GET',
    path: '/api/openapi.json',
    summary: 'This description',
    who: 'anyone',
    answer: z.record(z.string(), z.unknown()),
  },
  async ({ app }) => openApiDocument(app.settings.publicUrl),
);
