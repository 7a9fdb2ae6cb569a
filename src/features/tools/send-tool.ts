import { useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import * as z from 'zod/mini';
import { offlineOfThisPage } from '@/offline/offline';
import { callServer } from '@/offline/server-call';

const withId = z.looseObject({ id: z.string() });

/** Sends a change of tools; what the page shows is asked for anew once it was taken. */
export function useToolChange() {
  const client = useQueryClient();
  const [trouble, setTrouble] = useState<string>();
  const send = async (method: 'POST' | 'PATCH', path: string, body: unknown): Promise<string | undefined> => {
    const sent = await callServer(offlineOfThisPage(), { method, path, body, answer: withId });
    setTrouble(sent.ok ? undefined : sent.why);
    if (!sent.ok) return undefined;
    await client.invalidateQueries();
    return sent.body.id;
  };
  return { send, trouble };
}
