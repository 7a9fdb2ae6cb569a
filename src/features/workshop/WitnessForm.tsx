import { useQueryClient } from '@tanstack/react-query';
import { useState, type SyntheticEvent } from 'react';
import * as z from 'zod/mini';
import { Button } from '@/components/Button';
import { ErrorNote } from '@/components/ErrorNote';
import { Notice } from '@/components/Notice';
import { TextField } from '@/components/TextField';
import { offlineOfThisPage } from '@/offline/offline';
import { callServer } from '@/offline/server-call';
import { useServer } from '@/offline/use-server';

const PATH = '/api/workshop/witness';
const witnessAnswer = z.object({ address: z.nullable(z.string()) });

/** The owner chooses who keeps the signed heads: somebody who would not lie for the workshop. */
export function WitnessForm() {
  const client = useQueryClient();
  const { data } = useServer(PATH, witnessAnswer);
  const [typed, setTyped] = useState<string>();
  const [said, setSaid] = useState<string>();
  const [trouble, setTrouble] = useState<string>();
  const address = typed ?? data?.address ?? '';
  const call = async (method: 'PUT' | 'POST', body: object, words: string) => {
    const called = await callServer(offlineOfThisPage(), {
      method,
      path: PATH,
      body,
      answer: z.looseObject({}),
    });
    setTrouble(called.ok ? undefined : called.why);
    setSaid(called.ok ? words : undefined);
    if (called.ok) setTyped(undefined);
    await client.invalidateQueries();
  };
  const save = (event: SyntheticEvent) => {
    event.preventDefault();
    const next = address.trim() === '' ? null : address.trim();
    void call(
      'PUT',
      { address: next },
      next === null ? 'Heads stay in the house.' : 'Heads go there from now on.',
    );
  };
  return (
    <section className="part">
      <h2 className="part-title">Witness address</h2>
      <p className="page-words">
        At each class A hold point, at handover and once a day a signed head of the trail leaves the workshop.
        Choose an address outside it, of somebody who keeps letters: an insurer, a notary, a certifying body.
        Without one nobody outside can tell a trail that was cut short.
      </p>
      <form onSubmit={save} className="flex flex-wrap items-end gap-3">
        <TextField
          label="Witness address"
          type="email"
          value={address}
          onChange={(event) => setTyped(event.target.value)}
        />
        <Button type="submit" disabled={typed === undefined}>
          Keep
        </Button>
        <Button
          look="quiet"
          disabled={!data?.address || typed !== undefined}
          onClick={() => void call('POST', {}, 'A trial letter is on its way.')}
        >
          Send a trial letter
        </Button>
      </form>
      {said !== undefined && <Notice tone="good" title={said} />}
      {trouble !== undefined && (
        <ErrorNote happened={trouble} kept="The address is as it was." next="Mend it and try again." />
      )}
    </section>
  );
}
