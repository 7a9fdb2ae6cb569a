import { useState } from 'react';
import { ChoiceRows } from '@/components/ChoiceRows';
import { MainAction } from '@/components/MainAction';
import { QuietButton } from '@/components/QuietButton';
import type { StepOf } from '@/domain/plan';
import { NoteField } from '../NoteField';
import { StepFrame } from '../StepFrame';

const REASONS = [
  'That shell is not on the shelf',
  'That shell is damaged',
  'These grades are not mixed on this engine',
  'The supervisor decided so',
];

interface ShellReasonProps {
  step: StepOf<'choose-shells'>;
  /** As "upper thick, lower middle". */
  chosen: string;
  proposed: string;
  onReason: (reason: string) => void;
  onClose: () => void;
}

/** Why other shells than those proposed are put in: picked, or in words of one's own. */
export function ShellReason({ step, chosen, proposed, onReason, onClose }: ShellReasonProps) {
  const [picked, setPicked] = useState<string>();
  const [words, setWords] = useState('');
  const reason = [picked, words.trim()].filter((part) => part !== undefined && part !== '').join('. ');
  return (
    <StepFrame
      step={step}
      side={null}
      then={null}
      heading={
        <div className="grid gap-2 pb-4">
          <h1 className="floor-step">Why not as proposed?</h1>
          <p className="text-lg">
            Proposed: {proposed}. Chosen: {chosen}.
          </p>
        </div>
      }
      quiet={<QuietButton label="Back" onPress={onClose} />}
      main={
        <MainAction
          label="This is why"
          why={reason === '' ? 'a reason is needed' : undefined}
          onPress={() => onReason(reason)}
        />
      }
    >
      <div className="grid gap-6">
        <ChoiceRows
          label="Reason"
          isLabelUnseen
          columns={2}
          choices={REASONS.map((value) => ({ value, label: value }))}
          value={picked}
          onChoose={setPicked}
        />
        <NoteField label="Or in your words" value={words} onChange={setWords} />
      </div>
    </StepFrame>
  );
}
