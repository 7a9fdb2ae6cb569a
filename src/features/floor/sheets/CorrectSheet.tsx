import { useState } from 'react';
import { ChoiceRows } from '@/components/ChoiceRows';
import { Keypad } from '@/components/Keypad';
import { MainAction } from '@/components/MainAction';
import { QuietButton } from '@/components/QuietButton';
import { correctionClass } from '@/domain/correction-class';
import { whyNotWhose } from '@/domain/job-correction-rules';
import type { Kept } from '@/domain/job-state';
import type { PlanStep } from '@/domain/plan';
import { dayAndTime } from '@/domain/time-words';
import { LotEntry } from '../LotEntry';
import { NoteField } from '../NoteField';
import { decimalText, isNumber } from '../numbers';
import { useRun } from '../run-context';
import { BeforeAfter, keptWords } from './BeforeAfter';
import { correctableOn, fieldsOf, type CorrectField } from './correct-fields';
import { CorrectGrades } from './CorrectGrades';
import { afterWords } from './correct-words';
import { Sheet } from './Sheet';

interface CorrectSheetProps {
  step: PlanStep | undefined;
  onClose: () => void;
}

/** The records of a step, one of which is put right; the earlier value stays readable beside the new one. */
export function CorrectSheet({ step, onClose }: CorrectSheetProps) {
  const run = useRun();
  const entries = correctableOn(run.state, step).filter(
    (kept) => kept.kind === 'graded' || fieldsOf(run.state, run.workshop, kept).length > 0,
  );
  const [only] = entries.length === 1 ? entries : [];
  const [chosen, choose] = useState<string | undefined>(only?.id);
  const kept = entries.find(({ id }) => id === chosen);
  if (kept?.kind === 'graded')
    return <CorrectGrades kept={kept} onClose={onClose} onBack={() => choose(undefined)} />;
  if (kept) return <OneRecord kept={kept} onClose={onClose} onBack={() => choose(undefined)} />;
  return (
    <Sheet title={step ? `Correct: ${step.title}` : 'Correct'} onClose={onClose}>
      {entries.length === 0 && (
        <p className="text-xl">
          Nothing on this step has a value to correct. Go to the step first (touch Steps), or take back the
          last act.
        </p>
      )}
      <ul className="grid gap-3 [&_.quiet-button]:w-full [&_.quiet-button]:justify-start [&_.quiet-button]:text-left [&_.quiet-button]:text-xl">
        {entries.map((one) => (
          <li key={one.id}>
            <QuietButton
              shape="wide"
              label={keptWords(run.state, one)}
              why={whyNotHere(run, one)}
              onPress={() => choose(one.id)}
            />
            <p className="pt-1 text-base text-soft">
              {one.name}, {dayAndTime(one.at, run.workshop.zone)}
              {one.correctedBy === undefined ? '' : '; corrected before'}
            </p>
          </li>
        ))}
      </ul>
    </Sheet>
  );
}

function whyNotHere(run: ReturnType<typeof useRun>, kept: Kept): string | undefined {
  const verdict = whyNotWhose(kept, run.person.id, run.workshop);
  return verdict.ok ? undefined : `${kept.name} corrects it, or a supervisor`;
}

const REASONS = [
  'misread',
  'typed wrong',
  'wrong one picked',
  'the other end was meant',
  'read again at once',
];

function OneRecord({ kept, onClose, onBack }: { kept: Kept; onClose: () => void; onBack: () => void }) {
  const run = useRun();
  const fields = fieldsOf(run.state, run.workshop, kept);
  const [fieldId, setField] = useState(fields[0]?.id);
  const [value, setValue] = useState('');
  const [reason, setReason] = useState('');
  const field = fields.find(({ id }) => id === fieldId);
  const data = field && isWhole(field, value) ? field.with(cleaned(field, value)) : undefined;
  const isClass = data && correctionClass(kept.data, data);
  const why =
    data === undefined
      ? value !== '' && field?.id === 'width' && isNumber(value)
        ? 'the card can’t tell this width'
        : 'give the right value'
      : isClass === undefined
        ? 'that is what stands there'
        : reason.trim() === ''
          ? 'give the reason'
          : undefined;
  async function correct() {
    if (data === undefined || isClass === undefined) return;
    const isRecorded = await run.record([
      {
        kind: 'corrected',
        step: kept.step,
        with: [],
        data: { of: kept.id, class: isClass, reason: reason.trim(), data: { ...data } },
      },
    ]);
    if (isRecorded) onClose();
  }
  return (
    <Sheet
      title="Correct a record"
      onClose={onBack}
      foot={
        <MainAction
          label="Correct it"
          next={isClass && afterWords(run.state, kept, isClass)}
          why={why}
          isBusy={run.isBusy}
          onPress={() => void correct()}
        />
      }
    >
      <div className="grid items-start gap-6 @4xl/sheet:grid-cols-[1fr_26rem]">
        <div className="grid gap-5">
          <BeforeAfter kept={kept} after={data} />
          {fields.length > 1 && (
            <ChoiceRows
              label="What was recorded wrong"
              columns={2}
              choices={fields.map(({ id, label, before, unit }) => ({
                value: id,
                label,
                note: before === '' ? 'nothing' : shown(before, unit),
              }))}
              value={fieldId}
              onChoose={(id) => {
                setField(id);
                setValue('');
              }}
            />
          )}
        </div>
        {field && (
          <div className="@4xl/sheet:col-start-2 @4xl/sheet:row-span-2 @4xl/sheet:row-start-1">
            <FieldInput key={field.id} field={field} value={value} onChange={setValue} />
          </div>
        )}
        <NoteField label="Why" phrases={REASONS} value={reason} onChange={setReason} />
      </div>
    </Sheet>
  );
}

function FieldInput({
  field,
  value,
  onChange,
}: {
  field: CorrectField;
  value: string;
  onChange: (value: string) => void;
}) {
  switch (field.how) {
    case 'decimal':
    case 'integer':
      return (
        <Keypad
          label={field.label}
          unit={field.unit ?? ''}
          kind={field.how}
          value={value}
          onChange={onChange}
          hint={field.before === '' ? undefined : `recorded: ${shown(field.before, field.unit)}`}
        />
      );
    case 'choice':
      return (
        <ChoiceRows
          label={field.label}
          columns={(field.choices?.length ?? 0) > 4 ? 2 : 1}
          choices={(field.choices ?? []).map((choice) => ({
            ...choice,
            ...(choice.value === field.before ? { note: 'as recorded' } : {}),
          }))}
          value={value === '' ? undefined : value}
          onChoose={onChange}
        />
      );
    case 'lot':
      return (
        <LotEntry
          part={field.label.replace(/^Lot of (the |its )?/, '')}
          known={(field.known ?? []).filter((lot) => lot !== field.before)}
          value={value}
          onChange={onChange}
        />
      );
  }
}

function shown(value: string, unit: string | undefined): string {
  if (unit === undefined) return value;
  return unit === '°' ? `${value}°` : `${value} ${unit}`;
}

function isWhole({ how }: CorrectField, value: string): boolean {
  return how === 'decimal' || how === 'integer' ? isNumber(value) : value.trim() !== '';
}

function cleaned({ how }: CorrectField, value: string): string {
  return how === 'decimal' || how === 'integer' ? decimalText(value) : value.trim();
}
