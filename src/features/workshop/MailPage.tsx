import { QueryClientProvider, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import * as z from 'zod/mini';
import { Button } from '@/components/Button';
import { DataTable } from '@/components/DataTable';
import { ErrorNote } from '@/components/ErrorNote';
import { dateAndTime } from '@/domain/time-words';
import { newQueryClient, useServerList } from '@/offline/use-server';
import { WitnessForm } from './WitnessForm';

const mailAnswer = z.object({
  mail: z.array(
    z.object({
      id: z.string(),
      purpose: z.string(),
      address: z.string(),
      subject: z.string(),
      body: z.string(),
      madeAt: z.string(),
      state: z.string(),
      sentAt: z.nullable(z.string()),
      via: z.nullable(z.string()),
      trouble: z.nullable(z.string()),
    }),
  ),
  cursor: z.optional(z.string()),
});

type Mail = z.output<typeof mailAnswer>['mail'][number];

/** Where signed heads are mailed to, and every letter that left or is to leave. */
export function MailPage({ zone }: { zone: string }) {
  const [client] = useState(newQueryClient);
  return (
    <QueryClientProvider client={client}>
      <div className="page-head">
        <h1 className="page-title">Mail</h1>
      </div>
      <WitnessForm />
      <Letters zone={zone} />
    </QueryClientProvider>
  );
}

function Letters({ zone }: { zone: string }) {
  const client = useQueryClient();
  const list = useServerList('/api/mail', mailAnswer);
  const letters = list.data?.pages.flatMap((page) => page.mail);
  const [open, setOpen] = useState<string>();
  const opened = letters?.find(({ id }) => id === open);
  return (
    <section className="part">
      <h2 className="part-title">Letters</h2>
      {list.error && (
        <ErrorNote happened={list.error.message} kept="No letter is lost." next="Load the page again." />
      )}
      <DataTable
        caption="Letters, the newest first"
        columns={[
          { key: 'made', label: 'made' },
          { key: 'to', label: 'to' },
          { key: 'subject', label: 'subject', isWide: true },
          { key: 'state', label: 'state' },
          { key: 'acts', label: 'letter' },
        ]}
        rows={(letters ?? []).map((letter) => ({
          key: letter.id,
          isCurrent: letter.id === open,
          cells: {
            made: dateAndTime(letter.madeAt, zone),
            to: letter.address,
            subject: letter.subject,
            state: stateWords(letter, zone),
            acts: (
              <Button look="quiet" onClick={() => setOpen(letter.id === open ? undefined : letter.id)}>
                {letter.id === open ? 'Close' : 'Read'}
              </Button>
            ),
          },
        }))}
        emptyWords={
          letters ? 'No letter yet. The first goes out with the first signed head.' : 'Reading the mail'
        }
      />
      {opened && (
        <article className="letter" aria-label={opened.subject}>
          <pre>{opened.body}</pre>
        </article>
      )}
      <div className="flex gap-3 pt-3">
        <Button look="quiet" onClick={() => void client.invalidateQueries()}>
          Look again
        </Button>
        {list.hasNextPage && (
          <Button look="quiet" onClick={() => void list.fetchNextPage()} isBusy={list.isFetchingNextPage}>
            Older letters
          </Button>
        )}
      </div>
    </section>
  );
}

function stateWords({ state, via, sentAt, trouble }: Mail, zone: string): string {
  if (state === 'sent') {
    return via === 'here' ? 'kept here: no mail service is set' : `sent ${dateAndTime(sentAt ?? '', zone)}`;
  }
  if (state === 'failed') return `given up: ${trouble ?? 'no reason given'}`;
  return trouble === null ? 'on its way' : `will be tried again: ${trouble}`;
}
