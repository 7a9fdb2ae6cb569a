import { useQueryClient } from '@tanstack/react-query';
import { useState, type ReactNode } from 'react';
import { Button } from '@/components/Button';
import { Dialog } from '@/components/Dialog';
import { ErrorNote } from '@/components/ErrorNote';
import { Notice } from '@/components/Notice';
import { TextField } from '@/components/TextField';
import { recordAtDesk, sendKept, type DeskOutcome } from '@/offline/desk-record';
import { offlineOfThisPage } from '@/offline/offline';
import type { Draft } from '@/offline/record';

/** Somebody who may judge, on one job. */
export interface Judge {
  job: string;
  id: string;
  name: string;
}

interface JudgementDialogProps {
  title: string;
  judge: Judge;
  /** What the button says. */
  act: string;
  look: 'main' | 'stop';
  /** What is asked before it can be done. */
  ask: 'reason' | 'pin';
  draft: (answer: string) => Draft;
  children: ReactNode;
  onClose: () => void;
}

/** The browser's own storage failed; whether it was kept before that, the page tells once it is loaded again. */
function storageTrouble(error: unknown): DeskOutcome {
  const what = error instanceof Error ? error.message : String(error);
  const why = `This browser could not use its own storage (${what}). Load the page again to see whether it was kept.`;
  return { ok: false, code: 'storage', why };
}

/** A judgement on the record, given here and signed with the judge's own key: a reason or a PIN, and one press. */
export function JudgementDialog(props: JudgementDialogProps) {
  const { title, judge, act, look, ask, draft, children, onClose } = props;
  const client = useQueryClient();
  const [answer, setAnswer] = useState('');
  const [trouble, setTrouble] = useState<string>();
  const [kept, setKept] = useState<string[]>();
  const [isBusy, setBusy] = useState(false);
  const isReady = ask === 'pin' ? /^\d{4,}$/.test(answer) : answer.trim() !== '';
  async function send(sending: () => Promise<DeskOutcome>) {
    setBusy(true);
    setTrouble(undefined);
    const outcome = await sending().catch(storageTrouble);
    setBusy(false);
    if (ask === 'pin') setAnswer('');
    await client.invalidateQueries();
    if (outcome.ok) {
      onClose();
      return;
    }
    setTrouble(outcome.why);
    setKept(outcome.kept);
  }
  const offline = offlineOfThisPage();
  const record = () => send(() => recordAtDesk(offline, judge.job, draft(answer.trim()), judge.id));
  if (kept) {
    return (
      <Dialog
        title={title}
        isOpen
        onClose={onClose}
        actions={
          <Button
            look="main"
            isBusy={isBusy}
            onClick={() => void send(() => sendKept(offline, judge.job, kept))}
          >
            Send it now
          </Button>
        }
      >
        <Notice tone="unsure" title="Signed, and kept in this browser" isAlert>
          <p>
            {trouble} It is not on the record yet; it goes there by itself while the page is open. Don’t do it
            again.
          </p>
        </Notice>
      </Dialog>
    );
  }
  return (
    <Dialog
      title={title}
      isOpen
      onClose={onClose}
      closeLabel="Leave it as it is"
      actions={
        <Button look={look} disabled={!isReady} isBusy={isBusy} onClick={() => void record()}>
          {act}
        </Button>
      }
    >
      <div className="form">
        {children}
        {ask === 'reason' ? (
          <TextField
            label="Reason"
            value={answer}
            maxLength={500}
            onChange={(event) => setAnswer(event.target.value)}
            hint="It stays in the trail, so write no name into it."
          />
        ) : (
          <TextField
            label="Your PIN"
            type="password"
            inputMode="numeric"
            autoComplete="off"
            isFigure
            value={answer}
            onChange={(event) => setAnswer(event.target.value.replace(/\D/g, '').slice(0, 8))}
          />
        )}
        {trouble !== undefined && (
          <ErrorNote
            happened={trouble}
            kept="It was not taken. The record stands as it was, and nothing in it is lost."
            next={
              ask === 'pin' ? 'Key your PIN again, or leave it as it is.' : 'Try again, or leave it as it is.'
            }
          />
        )}
      </div>
    </Dialog>
  );
}
