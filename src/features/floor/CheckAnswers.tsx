import { useState } from 'react';
import { QuietButton } from '@/components/QuietButton';
import { Sign } from '@/components/Sign';
import type { PlanCheck } from '@/domain/plan';

export interface CheckAnswer {
  id: string;
  ok: boolean;
  note?: string | undefined;
}

/** What was said to be not in order, by check; the main action says the others. */
export type Exceptions = Record<string, { note?: string | undefined }>;

export interface CheckAnswersProps {
  label: string;
  checks: PlanCheck[];
  exceptions: Exceptions;
  onChange: (exceptions: Exceptions) => void;
}

/** The checks that the main action says are in order; a touch says which one isn't, and takes a few words. */
export function CheckAnswers({ label, checks, exceptions, onChange }: CheckAnswersProps) {
  const bad = checks.filter(({ id }) => exceptions[id] !== undefined);
  function toggle(id: string) {
    const { [id]: present, ...others } = exceptions;
    onChange(present === undefined ? { ...exceptions, [id]: {} } : others);
  }
  return (
    <div className="grid gap-4">
      <ol
        aria-label={label}
        className={checks.length > 2 ? 'grid gap-3 @lg/floor-main:grid-cols-2' : 'grid gap-3'}
      >
        {checks.map(({ id, ask }) => (
          <li key={id} className="grid">
            <button
              type="button"
              className="check-line"
              aria-pressed={exceptions[id] !== undefined}
              onClick={() => toggle(id)}
            >
              <span>{ask}</span>
              {exceptions[id] !== undefined && (
                <span className="check-line-bad">
                  <Sign name="cross" /> not in order
                </span>
              )}
            </button>
          </li>
        ))}
      </ol>
      {bad.map(({ id, ask }) => (
        <CheckNote
          key={id}
          ask={ask}
          note={exceptions[id]?.note ?? ''}
          onNote={(note) => onChange({ ...exceptions, [id]: note === '' ? {} : { note } })}
        />
      ))}
    </div>
  );
}

function CheckNote({ ask, note, onNote }: { ask: string; note: string; onNote: (note: string) => void }) {
  const [isOpen, setOpen] = useState(false);
  if (!isOpen && note === '') {
    return (
      <div className="flex flex-wrap items-center justify-between gap-3">
        <p className="flex min-w-60 flex-1 items-center gap-2 text-lg font-bold text-outside">
          <Sign name="cross" />A deviation will be opened: {ask}
        </p>
        <QuietButton shape="wide" label="Say what is wrong" onPress={() => setOpen(true)} />
      </div>
    );
  }
  return (
    <input
      className="min-h-18 w-full rounded-md border-2 border-strong bg-sheet px-4 text-xl"
      aria-label={`What is wrong: ${ask}`}
      placeholder="what is wrong"
      maxLength={500}
      value={note}
      onChange={(event) => onNote(event.target.value)}
    />
  );
}

/** Every check with its answer, in their order. */
export function answersOf(checks: PlanCheck[], exceptions: Exceptions): CheckAnswer[] {
  return checks.map(({ id }) =>
    exceptions[id] === undefined ? { id, ok: true } : { id, ok: false, ...exceptions[id] },
  );
}

/** What the main action says of the checks, as "Keep: 1 not in order, the others are"; undefined when all are. */
export function exceptionWords(checks: PlanCheck[], exceptions: Exceptions): string | undefined {
  const bad = checks.filter(({ id }) => exceptions[id] !== undefined).length;
  if (bad === 0) return undefined;
  if (bad === checks.length) return bad === 1 ? 'Keep: not in order' : 'Keep: none in order';
  return `Keep: ${bad} not in order, ${checks.length - bad} in order`;
}
