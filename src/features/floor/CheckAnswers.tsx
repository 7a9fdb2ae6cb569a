import { useState } from 'react';
import { QuietButton } from '@/components/QuietButton';
import { Sign } from '@/components/Sign';
import type { PlanCheck } from '@/domain/plan';

export interface CheckAnswer {
  id: string;
  ok: boolean;
  note?: string | undefined;
}

export type Answers = Record<string, CheckAnswer>;

export interface CheckAnswersProps {
  label: string;
  checks: PlanCheck[];
  answers: Answers;
  onChange: (answers: Answers) => void;
}

/** Each check with its two answers; what is not in order takes a few words. */
export function CheckAnswers({ label, checks, answers, onChange }: CheckAnswersProps) {
  const answer = (id: string, change: Partial<CheckAnswer>) =>
    onChange({ ...answers, [id]: { ok: true, ...answers[id], id, ...change } });
  return (
    <ol aria-label={label} className="grid gap-3">
      {checks.map(({ id, ask }) => (
        <CheckLine
          key={id}
          ask={ask}
          answer={answers[id]}
          onAnswer={(ok) => answer(id, { ok })}
          onNote={(note) => answer(id, { note: note === '' ? undefined : note })}
        />
      ))}
    </ol>
  );
}

interface CheckLineProps {
  ask: string;
  answer: CheckAnswer | undefined;
  onAnswer: (ok: boolean) => void;
  onNote: (note: string) => void;
}

function CheckLine({ ask, answer, onAnswer, onNote }: CheckLineProps) {
  return (
    <li className="grid gap-3 border-b border-rule pb-3">
      <div role="group" aria-label={ask} className="flex flex-wrap items-center gap-3">
        <p className="min-w-60 flex-1 text-xl font-semibold">{ask}</p>
        <div className="flex gap-3">
          <QuietButton
            shape="wide"
            sign="tick"
            label="In order"
            isPressed={answer?.ok === true}
            onPress={() => onAnswer(true)}
          />
          <QuietButton
            shape="wide"
            sign="cross"
            label="Not in order"
            isPressed={answer?.ok === false}
            onPress={() => onAnswer(false)}
          />
        </div>
      </div>
      {answer?.ok === false && <CheckNote ask={ask} note={answer.note ?? ''} onNote={onNote} />}
    </li>
  );
}

function CheckNote({ ask, note, onNote }: { ask: string; note: string; onNote: (note: string) => void }) {
  const [isOpen, setOpen] = useState(false);
  if (!isOpen && note === '') {
    return (
      <div className="flex items-center gap-3">
        <p className="flex items-center gap-2 text-lg font-bold text-outside">
          <Sign name="cross" />A deviation will be opened
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

/** All checks answered in order at once. */
export function allInOrder(checks: PlanCheck[]): CheckAnswer[] {
  return checks.map(({ id }) => ({ id, ok: true }));
}

/** The answers in the order of the checks; undefined while one is missing. */
export function completeAnswers(checks: PlanCheck[], answers: Answers): CheckAnswer[] | undefined {
  const given = checks.flatMap(({ id }) => answers[id] ?? []);
  return given.length === checks.length ? given : undefined;
}

/** How many checks have no answer yet, in words for a barred action. */
export function missingWords(checks: PlanCheck[], answers: Answers): string {
  const missing = checks.filter(({ id }) => !answers[id]).length;
  return missing === 1 ? 'one check to answer' : `${missing} checks to answer`;
}
