import { useState } from 'react';
import { ChoiceRows } from '@/components/ChoiceRows';
import { HoldButton } from '@/components/HoldButton';
import { MainAction } from '@/components/MainAction';
import type { PlanStep } from '@/domain/plan';
import { knownLots } from '../known-lots';
import { LotEntry } from '../LotEntry';
import { NoteField } from '../NoteField';
import { useRun } from '../run-context';
import { Sheet } from './Sheet';

interface StepSheetProps {
  step: PlanStep;
  onClose: () => void;
}

/** Sets a step aside with the reason; class A by a supervisor. */
export function NotApplicableSheet({ step, onClose }: StepSheetProps) {
  const run = useRun();
  const [reason, setReason] = useState('');
  async function setAside() {
    if (await run.record([{ kind: 'not-applicable', step: step.id, data: { reason: reason.trim() } }]))
      onClose();
  }
  return (
    <Sheet
      title="Not applicable"
      onClose={onClose}
      foot={
        <MainAction
          label="Set it aside"
          why={reason.trim() === '' ? 'give the reason' : undefined}
          isBusy={run.isBusy}
          onPress={() => void setAside()}
        />
      }
    >
      <div className="grid gap-5">
        <p className="text-xl font-bold">{step.title}</p>
        {step.class === 'A' && <p className="text-lg">Class A: a supervisor sets it aside.</p>}
        <NoteField
          label="Why it doesn’t apply"
          phrases={['not fitted on this vehicle', 'done at an earlier visit']}
          value={reason}
          onChange={setReason}
        />
      </div>
    </Sheet>
  );
}

/** The step waits for a part, or the part has come; other steps stay free. */
export function WaitingForPartSheet({ step, onClose }: StepSheetProps) {
  const run = useRun();
  const isWaiting = run.state.steps[step.id]?.status === 'waiting for a part';
  const named = 'part' in step ? (step.part ?? '') : '';
  const [part, setPart] = useState(named);
  const [lot, setLot] = useState('');
  async function record() {
    const isRecorded = await run.record([
      isWaiting
        ? { kind: 'part-arrived', step: step.id, data: lot === '' ? {} : { lot } }
        : { kind: 'waiting-for-part', step: step.id, data: { part: part.trim() } },
    ]);
    if (isRecorded) onClose();
  }
  return (
    <Sheet
      title={isWaiting ? 'The part is here' : 'Waiting for a part'}
      onClose={onClose}
      foot={
        <MainAction
          label={isWaiting ? 'It is here' : 'It waits'}
          next={isWaiting ? 'the step can go on' : 'other steps stay free'}
          why={!isWaiting && part.trim() === '' ? 'name the part' : undefined}
          isBusy={run.isBusy}
          onPress={() => void record()}
        />
      }
    >
      <div className="grid gap-5">
        <p className="text-xl font-bold">{step.title}</p>
        {isWaiting ? (
          <LotEntry
            part={named === '' ? 'part' : named}
            known={knownLots(run.state, named)}
            value={lot}
            onChange={setLot}
          />
        ) : (
          <NoteField label="Which part" value={part} onChange={(value) => setPart(value.slice(0, 120))} />
        )}
      </div>
    </Sheet>
  );
}

/** Work beyond the order: what, and who agreed to it when and how. */
export function ExtraWorkSheet({ onClose }: { onClose: () => void }) {
  const run = useRun();
  const [words, setWords] = useState('');
  const [who, setWho] = useState<'customer' | 'named person'>();
  const [how, setHow] = useState<string>();
  const why = words.trim() === '' ? 'say what' : !who ? 'who agreed?' : !how ? 'how?' : undefined;
  async function record() {
    if (!who || how === undefined) return;
    const approval = { who, how, when: new Date(run.now()).toISOString() };
    if (await run.record([{ kind: 'extra-work', data: { words: words.trim(), approval } }])) onClose();
  }
  return (
    <Sheet
      title="Extra work"
      onClose={onClose}
      foot={
        <MainAction
          label="Record the agreement"
          why={why}
          isBusy={run.isBusy}
          onPress={() => void record()}
        />
      }
    >
      <div className="grid gap-5">
        <NoteField label="What is done beyond the order" value={words} onChange={setWords} />
        <ChoiceRows
          label="Who agreed, just now"
          columns={2}
          choices={[
            { value: 'customer', label: 'the customer' },
            { value: 'named person', label: 'the person named at book-in' },
          ]}
          value={who}
          onChoose={(value) => setWho(value === 'customer' ? value : 'named person')}
        />
        <ChoiceRows
          label="How"
          columns={3}
          choices={['by telephone', 'in person', 'in writing'].map((value) => ({ value, label: value }))}
          value={how}
          onChoose={setHow}
        />
      </div>
    </Sheet>
  );
}

const WHEN = ['a few minutes ago', 'an hour ago', 'earlier today', 'yesterday'];

/** The next touch is marked as recorded afterwards: when it was really done, and why it comes late. */
export function AfterwardsSheet({
  onClose,
  onChoose,
}: {
  onClose: () => void;
  onChoose: (afterwards: { when: string; reason: string }) => void;
}) {
  const [when, setWhen] = useState<string>();
  const [reason, setReason] = useState('');
  const why = when === undefined ? 'when was it done?' : reason.trim() === '' ? 'why is it late?' : undefined;
  return (
    <Sheet
      title="Done earlier, recorded now"
      onClose={onClose}
      foot={
        <MainAction
          label="Use it for the next touch"
          why={why}
          onPress={() => when !== undefined && onChoose({ when, reason: reason.trim() })}
        />
      }
    >
      <div className="grid gap-5">
        <p className="text-lg">The next touch carries this, and it stays visible in the record.</p>
        <ChoiceRows
          label="When it was done"
          columns={2}
          choices={WHEN.map((value) => ({ value, label: value }))}
          value={when}
          onChoose={setWhen}
        />
        <NoteField
          label="Why it is recorded late"
          phrases={['tablet was charging', 'both hands were needed', 'forgotten']}
          value={reason}
          onChange={setReason}
        />
      </div>
    </Sheet>
  );
}

/** Ends the job with what is open listed, and the vehicle not to be run. */
export function EndUnfinishedSheet({ onClose }: { onClose: () => void }) {
  const run = useRun();
  const [reason, setReason] = useState('');
  const open = run.state.open.map(({ name }) => name.slice(0, 200));
  async function end() {
    if (
      await run.record([
        { kind: 'ended-unfinished', data: { reason: reason.trim(), open, notToBeRun: true } },
      ])
    )
      onClose();
  }
  return (
    <Sheet
      title="End the job unfinished"
      onClose={onClose}
      foot={
        <HoldButton
          size="main"
          tone="stop"
          label="End unfinished, not to be run"
          why={reason.trim() === '' ? 'give the reason' : undefined}
          onHeld={() => void end()}
        />
      }
    >
      <div className="grid gap-5">
        <p className="text-2xl font-bold text-outside">The engine is not to be run.</p>
        <p className="text-lg">
          {open.length === 0 ? 'Nothing is on the open list.' : `Still open: ${open.join(', ')}.`}
        </p>
        <NoteField label="Why it ends here" value={reason} onChange={setReason} />
      </div>
    </Sheet>
  );
}
