import { QueryClientProvider, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import * as z from 'zod/mini';
import { Button } from '@/components/Button';
import { DataTable } from '@/components/DataTable';
import { ErrorNote } from '@/components/ErrorNote';
import { LookPanel } from '@/components/LookPanel';
import { Notice } from '@/components/Notice';
import { dayAndTime } from '@/domain/time-words';
import { offlineOfThisPage } from '@/offline/offline';
import { callServer } from '@/offline/server-call';
import { newQueryClient, useServer } from '@/offline/use-server';
import { ChangePasswordForm } from './ChangePasswordForm';
import { PinForm } from './PinForm';

export interface MyPageProps {
  person: string;
  name: string;
  zone: string;
}

const pinAnswer = z.object({
  hasPin: z.boolean(),
  setAt: z.nullable(z.string()),
  lockedUntil: z.nullable(z.string()),
  attempts: z.array(
    z.object({ at: z.string(), outcome: z.string(), purpose: z.string(), tablet: z.nullable(z.string()) }),
  ),
});
type PinAnswer = z.infer<typeof pinAnswer>;

/** One's own page: signing PIN and how it was tried, password, and signing out. */
export function MyPage(props: MyPageProps) {
  const [client] = useState(newQueryClient);
  return (
    <QueryClientProvider client={client}>
      <Mine {...props} />
    </QueryClientProvider>
  );
}

function Mine({ person, name, zone }: MyPageProps) {
  const [trouble, setTrouble] = useState<string>();
  const pin = useServer('/api/pins', pinAnswer);
  const client = useQueryClient();
  const signOut = async () => {
    const path = '/api/auth/sign-out';
    const out = await callServer(offlineOfThisPage(), {
      method: 'POST',
      path,
      body: { person },
      answer: z.looseObject({}),
    });
    if (out.ok) window.location.assign('/sign-in');
    else setTrouble(out.why);
  };
  return (
    <>
      <div className="page-head">
        <h1 className="page-title">{name}</h1>
        <Button look="quiet" onClick={() => void signOut()}>
          Sign out here
        </Button>
      </div>
      {trouble !== undefined && (
        <ErrorNote happened={trouble} kept="You are still signed in." next="Try it again." />
      )}
      <div className="desk-columns">
        <div>
          <MyPin pin={pin} zone={zone} onSet={() => void client.invalidateQueries()} />
          <section className="part">
            <h2 className="part-title">Password</h2>
            <ChangePasswordForm />
          </section>
        </div>
        <div>
          <PinTries tries={pin.data?.attempts ?? []} zone={zone} />
          <section className="part">
            <h2 className="part-title">How this device shows it</h2>
            <LookPanel />
          </section>
        </div>
      </div>
    </>
  );
}

interface MyPinProps {
  pin: { data: PinAnswer | undefined; error: Error | null };
  zone: string;
  onSet: () => void;
}

function MyPin({ pin: { data, error }, zone, onSet }: MyPinProps) {
  return (
    <section className="part">
      <h2 className="part-title">Signing PIN</h2>
      {error && (
        <ErrorNote
          happened={error.message}
          kept="Your PIN is as it was."
          next="It is asked for again by itself."
        />
      )}
      {data && !data.hasPin && (
        <Notice tone="unsure" title="You have no signing PIN yet">
          <p>Without it you can’t sign a hold point or take a job over. Six digits that only you know.</p>
        </Notice>
      )}
      {data?.lockedUntil && (
        <Notice tone="stop" title={`Your PIN is locked until ${dayAndTime(data.lockedUntil, zone)}`}>
          <p>It was typed wrong too often. If it wasn’t you, tell the owner.</p>
        </Notice>
      )}
      <PinForm hasPin={data?.hasPin === true} onSet={onSet} />
    </section>
  );
}

/** Every try of the PIN of late, so that its owner sees one that was not theirs. */
function PinTries({ tries, zone }: { tries: PinAnswer['attempts']; zone: string }) {
  return (
    <section className="part">
      <h2 className="part-title">How your PIN was tried of late</h2>
      <DataTable
        caption="How your PIN was tried"
        columns={[
          { key: 'at', label: 'when' },
          { key: 'outcome', label: 'it was' },
          { key: 'purpose', label: 'for', isWide: true },
          { key: 'tablet', label: 'tablet', isSoft: true },
        ]}
        rows={tries.map(({ at, outcome, purpose, tablet }, i) => ({
          key: `${at} ${i}`,
          cells: { at: dayAndTime(at, zone), outcome, purpose, tablet: tablet ?? 'none' },
        }))}
        emptyWords="It was not tried yet."
      />
    </section>
  );
}
