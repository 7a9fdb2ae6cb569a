import { useQueryClient } from '@tanstack/react-query';
import { useEffect, useState } from 'react';
import { Notice } from '@/components/Notice';
import { watchKept, type KeptHere } from '@/offline/desk-record';
import { offlineOfThisPage } from '@/offline/offline';

/** What is signed in this browser and not on the record yet, because the server was not reached or has it wait. */
export function JobKept({ job }: { job: string }) {
  const client = useQueryClient();
  const [kept, setKept] = useState<KeptHere>({ count: 0 });
  useEffect(() => {
    let before = 0;
    return watchKept(offlineOfThisPage(), job, (now) => {
      // What was sent is on the record now, which the page reads from the server.
      if (now.count < before) void client.invalidateQueries();
      before = now.count;
      setKept(now);
    });
  }, [client, job]);
  if (kept.count === 0) return null;
  return (
    <Notice
      tone="unsure"
      title={
        kept.count === 1
          ? '1 entry is signed and kept in this browser'
          : `${kept.count} entries are signed and kept in this browser`
      }
      isAlert
    >
      <p>
        {kept.reason ?? 'The server was not reached.'} It is not on the record yet; it goes there by itself
        while this page is open, and when you come back to it. Nothing has to be done again.
      </p>
    </Notice>
  );
}
