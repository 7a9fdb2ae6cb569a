import { useState } from 'react';
import { ChoiceRows } from '@/components/ChoiceRows';
import { MainAction } from '@/components/MainAction';
import { QuietButton } from '@/components/QuietButton';
import type { DeviationGuide } from '@/domain/deviation-guide';
import type { Deviation } from '@/domain/job-state';
import { findStep } from '@/domain/plan';
import { dayAndTime } from '@/domain/time-words';
import { NoteField } from '../NoteField';
import { useRun } from '../run-context';
import { Sheet } from './Sheet';

const DISPOSITIONS = [
  { value: 'rework', label: 'Rework', note: 'it is done again' },
  { value: 'replace', label: 'Replace', note: 'with another part, and done again' },
  { value: 'accept as is', label: 'Accept as is', note: 'it stays, with the reason' },
  { value: 'scrap', label: 'Scrap', note: 'the part is not used' },
] as const;

type Disposition = (typeof DISPOSITIONS)[number]['value'];

interface DispositionFormProps {
  deviation: Deviation;
  /** What is known of a deviation that tablets brought about. */
  guide?: DeviationGuide | undefined;
  /** It is disposed of, or left as it is. */
  onDone: () => void;
}

/** What becomes of a deviation; a supervisor or the quality lead says so. */
export function DispositionForm(props: DispositionFormProps) {
  const { person } = useRun();
  const may = person.roles.some((role) => role === 'supervisor' || role === 'quality lead');
  return may ? <Disposing {...props} /> : <NeedsSupervisor {...props} />;
}

function Disposing({ deviation, guide, onDone }: DispositionFormProps) {
  const run = useRun();
  const [disposition, setDisposition] = useState<Disposition>();
  const [reason, setReason] = useState('');
  const [agreed, setAgreed] = useState<'by telephone' | 'in person' | 'in writing'>();
  const isOutside = deviation.rule === 'clearance-outside' || deviation.rule === 'limit-outside';
  const needsCustomer = isOutside && disposition === 'accept as is';
  const why =
    disposition === undefined
      ? 'what becomes of it?'
      : needsCustomer && !agreed
        ? 'the customer’s word is needed'
        : reason.trim() === ''
          ? 'give the reason'
          : undefined;
  async function dispose(chosen: Disposition) {
    const customerAgreed =
      agreed && needsCustomer
        ? { customerAgreed: { when: new Date(run.now()).toISOString(), how: agreed } }
        : {};
    const isRecorded = await run.record([
      {
        kind: 'deviation-disposed',
        data: { deviation: deviation.id, disposition: chosen, reason: reason.trim(), ...customerAgreed },
      },
    ]);
    if (isRecorded) onDone();
  }
  return (
    <Sheet
      title="Dispose of the deviation"
      onClose={onDone}
      foot={
        <MainAction
          label="Dispose of it"
          next={`as ${run.person.name}`}
          why={why}
          isBusy={run.isBusy}
          onPress={() => disposition && void dispose(disposition)}
        />
      }
    >
      <div className="grid gap-5">
        <WhatIsWrong deviation={deviation} guide={guide} />
        <ChoiceRows
          label="What becomes of it"
          columns={2}
          choices={choicesOf(guide)}
          value={disposition}
          onChoose={(value) => setDisposition(DISPOSITIONS.find((each) => each.value === value)?.value)}
        />
        {needsCustomer && (
          <ChoiceRows
            label="The customer agreed, just now"
            columns={3}
            choices={(['by telephone', 'in person', 'in writing'] as const).map((value) => ({
              value,
              label: value,
            }))}
            value={agreed}
            onChoose={(value) => setAgreed(value)}
          />
        )}
        <NoteField label="Reason" value={reason} onChange={setReason} />
      </div>
    </Sheet>
  );
}

/** The dispositions that make sense: all, unless more is known of what happened. */
function choicesOf(guide: DeviationGuide | undefined) {
  if (guide === undefined) return [...DISPOSITIONS];
  return guide.choices.flatMap(({ value, note }) =>
    DISPOSITIONS.filter((each) => each.value === value).map((each) => ({ ...each, note })),
  );
}

/** The words of the deviation, the step that it is on, and who said so. */
function WhatIsWrong({ deviation, guide }: Pick<DispositionFormProps, 'deviation' | 'guide'>) {
  const { state, workshop } = useRun();
  const { words, step, raisedAt, raisedByName } = deviation;
  const title = step === undefined ? undefined : findStep(state.plan, step)?.title;
  return (
    <div>
      <p className="text-xl font-bold">{guide?.happened ?? words}</p>
      <p className="text-lg text-soft">
        {title === undefined ? '' : `${title}; `}class {deviation.class}, {raisedByName},{' '}
        {dayAndTime(raisedAt, workshop.zone)}
      </p>
      {guide && (
        <p className="pt-2 text-lg">
          {guide.blocked} {guide.next}
        </p>
      )}
    </div>
  );
}

function NeedsSupervisor({ deviation, guide, onDone }: DispositionFormProps) {
  const run = useRun();
  return (
    <Sheet
      title="Dispose of the deviation"
      onClose={onDone}
      foot={
        <QuietButton shape="wide" label="Change who is working" onPress={() => run.openSheet('person')} />
      }
    >
      <div className="grid gap-4">
        <WhatIsWrong deviation={deviation} guide={guide} />
        <p className="text-lg">
          A supervisor or the quality lead disposes of a deviation. Hand the tablet over and change who is
          working; change back after.
        </p>
      </div>
    </Sheet>
  );
}
