import { QueryClientProvider } from '@tanstack/react-query';
import { useState } from 'react';
import { newQueryClient } from '@/offline/use-server';
import { BringInFile } from './BringInFile';
import { Tablets } from './Tablets';

/** The tablets of the workshop: which are lost, and what one of them saved as a file. */
export function TabletsPage({ zone }: { zone: string }) {
  const [client] = useState(newQueryClient);
  return (
    <QueryClientProvider client={client}>
      <div className="page-head">
        <h1 className="page-title">Tablets</h1>
      </div>
      <Tablets zone={zone} title="Known to the workshop" />
      <BringInFile zone={zone} />
    </QueryClientProvider>
  );
}
