import { useQueryClient } from '@tanstack/react-query';
import { useState, type ReactNode } from 'react';
import { Button } from '@/components/Button';
import { Dialog } from '@/components/Dialog';
import { ErrorNote } from '@/components/ErrorNote';
import { TextField } from '@/components/TextField';
import { recordAtDesk } from '@/offline/desk-record';
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

/** A judgement on the record, given here and signed with the judge's own key: a reason or a PIN, and one press. */
export function JudgementDialog(props: JudgementDialogProps) {
  const { title, judge, act, look, ask, draft, children, onClose } = props;
  const client = useQueryClient();
  const [answer, setAnswer] = useState('');
  const [trouble, setTrouble] = useState<string>();
  const [isBusy, setBusy] = useState(false);
  const isReady = ask === 'pin' ? /^\d{4,}$/.test(answer) : answer.trim() !== '';
  async function record() {
    setBusy(true);
    setTrouble(undefined);
    const outcome = await recordAtDesk(offlineOfThisPage(), judge.job, draft(answer.trim()), judge.id);
    setBusy(false);
    if (ask === 'pin') setAnswer('');
    await client.invalidateQueries();
    if (outcome.ok) onClose();
    else setTrouble(outcome.why);
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
            kept="The record is as it was; nothing that was recorded is lost."
            next="Mend it and try again."
          />
        )}
      </div>
    </Dialog>
  );
}
