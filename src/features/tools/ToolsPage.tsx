import { QueryClientProvider } from '@tanstack/react-query';
import { useState, type ReactNode } from 'react';
import { Button } from '@/components/Button';
import { DataTable, type DataColumn } from '@/components/DataTable';
import { ErrorNote } from '@/components/ErrorNote';
import { Subnav } from '@/components/Subnav';
import { dayIn, dayWords } from '@/domain/time-words';
import { standingOf } from '@/domain/tool-standing';
import { newQueryClient, useServerList } from '@/offline/use-server';
import { AddToolDialog } from './ToolDialogs';
import { Standing } from './Standing';
import { toolsAnswer, type ToolAnswer } from './tool-answer';
import { classWords, rangeWords } from './tool-facts';

export interface ToolsPageProps {
  zone: string;
  /** May this person add a tool? */
  canChange: boolean;
  /** Which tools: all, those whose date is near, or those that class A may not use. */
  show: ToolsShown;
  /** Where to go once a tool is added; the browser goes there unless told otherwise. */
  goTo?: ((path: string) => void) | undefined;
}

export type ToolsShown = 'all' | 'due' | 'past';

/** The tools of the workshop, with until when each counts. */
export function ToolsPage(props: ToolsPageProps) {
  const [client] = useState(newQueryClient);
  return (
    <QueryClientProvider client={client}>
      <ToolList {...props} />
    </QueryClientProvider>
  );
}

const COLUMNS: DataColumn[] = [
  { key: 'name', label: 'tool' },
  { key: 'kind', label: 'kind' },
  { key: 'serial', label: 'serial' },
  { key: 'range', label: 'range', isFigure: true },
  { key: 'due', label: 'counts until', align: 'right' },
  { key: 'standing', label: 'how it stands', isWide: true },
];

const EMPTY: Record<ToolsShown, string> = {
  all: 'No tool is known yet. Class A steps need one.',
  due: 'No calibration runs out within 30 days.',
  past: 'Every tool in use may be used.',
};

function ToolList({ zone, canChange, show, goTo = goThere }: ToolsPageProps) {
  const list = useServerList(show === 'all' ? '/api/tools' : `/api/tools?show=${show}`, toolsAnswer);
  const tools = list.data?.pages.flatMap((page) => page.tools) ?? [];
  const [isAdding, setIsAdding] = useState(false);
  const today = dayIn(zone, new Date().toISOString());
  return (
    <>
      <div className="page-head">
        <h1 className="page-title">Tools</h1>
        {canChange && (
          <Button look="main" onClick={() => setIsAdding(true)}>
            Add a tool
          </Button>
        )}
      </div>
      <Subnav
        label="Which tools"
        links={[
          { href: '/tools', label: 'All', isCurrent: show === 'all' },
          { href: '/tools?show=due', label: 'Due soon', isCurrent: show === 'due' },
          { href: '/tools?show=past', label: 'Past or failed', isCurrent: show === 'past' },
        ]}
      />
      {list.error && (
        <ErrorNote
          happened={list.error.message}
          kept="No tool was changed."
          next="The list is asked for again by itself."
        />
      )}
      {list.isPending ? (
        <p role="status">Reading the tools</p>
      ) : (
        <DataTable
          caption="The tools of the workshop"
          columns={COLUMNS}
          rows={tools.map((tool) => ({
            key: tool.id,
            isSoft: tool.state === 'withdrawn',
            cells: cellsOf(tool, today),
          }))}
          emptyWords={EMPTY[show]}
        />
      )}
      {list.hasNextPage && (
        <Button look="quiet" onClick={() => void list.fetchNextPage()} isBusy={list.isFetchingNextPage}>
          More tools
        </Button>
      )}
      {isAdding && <AddToolDialog onClose={() => setIsAdding(false)} goTo={goTo} />}
    </>
  );
}

function goThere(path: string): void {
  location.assign(path);
}

function cellsOf(tool: ToolAnswer, today: string): Record<string, ReactNode> {
  const classed = classWords(tool);
  return {
    name: (
      <a href={`/tools/${tool.id}`} className="job-link">
        {tool.name}
      </a>
    ),
    kind: (
      <>
        {tool.kind}
        {classed !== '' && <span className="cell-note">{classed}</span>}
      </>
    ),
    serial: <span className="figure">{tool.serial}</span>,
    range: rangeWords(tool),
    due: tool.dueOn === null ? '' : dayWords(tool.dueOn),
    standing: <Standing standing={standingOf(tool, today)} isShort />,
  };
}
