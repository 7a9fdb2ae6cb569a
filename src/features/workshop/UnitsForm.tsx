import { QueryClientProvider, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import * as z from 'zod/mini';
import { ChoiceRows } from '@/components/ChoiceRows';
import { ErrorNote } from '@/components/ErrorNote';
import { SECOND_UNITS } from '@/domain/second-unit';
import { offlineOfThisPage } from '@/offline/offline';
import { callServer } from '@/offline/server-call';
import { newQueryClient, useServer } from '@/offline/use-server';

const workshopAnswer = z.object({ secondUnits: z.enum(SECOND_UNITS) });

/** The owner chooses whether inches and pounds stand beside SI, for a shop whose tools are marked in them. */
export function UnitsForm() {
  const [client] = useState(newQueryClient);
  return (
    <QueryClientProvider client={client}>
      <Units />
    </QueryClientProvider>
  );
}

function Units() {
  const client = useQueryClient();
  const { data } = useServer('/api/workshop', workshopAnswer);
  const [trouble, setTrouble] = useState<string>();
  if (!data) return null;
  const choose = async (shown: (typeof SECOND_UNITS)[number]) => {
    const called = await callServer(offlineOfThisPage(), {
      method: 'PUT',
      path: '/api/workshop/units',
      body: { shown },
      answer: z.looseObject({}),
    });
    setTrouble(called.ok ? undefined : called.why);
    await client.invalidateQueries();
  };
  return (
    <section className="part">
      <h2 className="part-title">Units on the Floor</h2>
      <p className="page-words">
        SI always stands first, and is what is set, judged and recorded. Where tools or sheets are marked in
        inches and pounds, those can stand beside it.
      </p>
      <ChoiceRows
        label="Units on the Floor"
        isLabelUnseen
        columns={2}
        choices={[
          { value: 'none', label: 'SI alone', note: '40 N·m' },
          { value: 'inch and pound', label: 'Inch and pound beside it', note: '40 N·m, 29.5 lbf·ft' },
        ]}
        value={data.secondUnits}
        onChoose={(shown) => void choose(shown)}
      />
      {trouble !== undefined && (
        <ErrorNote happened={trouble} kept="The units are as they were." next="Try it again." />
      )}
    </section>
  );
}
