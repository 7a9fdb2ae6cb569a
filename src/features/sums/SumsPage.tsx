import { useState, useSyncExternalStore } from 'react';
import { FloorFrame } from '@/components/FloorFrame';
import { Keypad } from '@/components/Keypad';
import { QuietButton } from '@/components/QuietButton';
import { AdapterDrawing } from './AdapterDrawing';
import { answerTo, type Sum, type SumChoice, type SumField, type SumInput, SUMS } from './sums';

const LONGEST = 9;

/** The sums of the bench, one at a time, on the Floor and without a network; nothing here is recorded. */
export function SumsPage() {
  const asked = useSyncExternalStore(watchAddress, readAddress, () => '');
  const address = new URLSearchParams(asked);
  const [picked, pick] = useState<Sum['id']>();
  const sum = SUMS.find(({ id }) => id === (picked ?? address.get('sum'))) ?? SUMS[0];
  const job = address.get('job');
  return (
    <SumScreen
      key={`${sum.id} ${asked}`}
      sum={sum}
      target={address.get('target') ?? ''}
      back={job === null ? '/floor' : `/floor#job=${encodeURIComponent(job)}`}
      onPick={pick}
    />
  );
}

interface SumScreenProps {
  sum: Sum;
  /** A torque that was asked for on the screen before. */
  target: string;
  back: string;
  onPick: (id: Sum['id']) => void;
}

function SumScreen({ sum, target, back, onPick }: SumScreenProps) {
  const [input, setInput] = useState<SumInput>(() => ({
    values: /^\d+(\.\d+)?$/.test(target) ? { target } : {},
    chosen: {},
  }));
  const fields = sum.fields(input);
  const [at, setAt] = useState(() => firstEmpty(fields, input)?.id);
  const field = fields.find(({ id }) => id === at) ?? fields[0];
  const typed = input.values[field.id] ?? '';
  const isBelow = typed.startsWith('-');
  const keep = (value: string) => setInput({ ...input, values: { ...input.values, [field.id]: value } });
  return (
    <FloorFrame
      job={{ label: 'Sums', note: 'nothing is recorded here' }}
      phase={{ label: sum.title, note: 'worked out on this tablet' }}
      sync={{ label: 'Works offline', note: 'no network needed' }}
      person={{ label: 'Back', note: 'to the Floor', onPress: () => location.assign(back) }}
      side={
        <div className="grid gap-3">
          <Keypad
            key={field.id}
            label={isBelow ? `${field.title}, below zero` : field.title}
            unit={field.unit}
            maxLength={LONGEST}
            value={typed.replace('-', '')}
            hint={field.how}
            onChange={(value) => keep(isBelow ? `-${value}` : value)}
            onEnter={() => setAt(nextOf(fields, field).id)}
          />
          {field.isSigned && (
            <QuietButton
              shape="wide"
              label="Below zero"
              isPressed={isBelow}
              onPress={() => keep(isBelow ? typed.slice(1) : `-${typed}`)}
            />
          )}
        </div>
      }
      main={<SumKeys present={sum.id} onPick={onPick} />}
    >
      <div className="sum">
        <h1 className="unseen">{sum.title}</h1>
        {sum.choices(input).map((choice) => (
          <SumKeysOf
            key={choice.id}
            choice={choice}
            value={input.chosen[choice.id] ?? choice.options[0] ?? ''}
            onChoose={(value) => setInput({ ...input, chosen: { ...input.chosen, [choice.id]: value } })}
          />
        ))}
        {sum.id === 'adapter' && <AdapterDrawing angle={Number(input.values.angle ?? '0')} at={field.id} />}
        {fields.length > 1 && <Fields fields={fields} input={input} at={field.id} onPick={setAt} />}
        <Answer sum={sum} input={input} />
      </div>
    </FloorFrame>
  );
}

function SumKeys({ present, onPick }: { present: Sum['id']; onPick: (id: Sum['id']) => void }) {
  return (
    <nav className="sum-keys" aria-label="Sums">
      {SUMS.map(({ id, short }) => (
        <button
          key={id}
          type="button"
          className="sum-key"
          aria-current={id === present ? 'page' : undefined}
          onClick={() => onPick(id)}
        >
          {short}
        </button>
      ))}
    </nav>
  );
}

interface SumKeysOfProps {
  choice: SumChoice;
  value: string;
  onChoose: (value: string) => void;
}

function SumKeysOf({ choice: { title, options }, value, onChoose }: SumKeysOfProps) {
  const chosen = options.includes(value) ? value : options[0];
  return (
    <div className="sum-options" role="group" aria-label={title}>
      {options.map((option) => (
        <button
          key={option}
          type="button"
          className="sum-option"
          aria-pressed={option === chosen}
          onClick={() => onChoose(option)}
        >
          {option}
        </button>
      ))}
    </div>
  );
}

interface FieldsProps {
  fields: readonly SumField[];
  input: SumInput;
  at: string;
  onPick: (id: string) => void;
}

function Fields({ fields, input, at, onPick }: FieldsProps) {
  return (
    <div className="sum-fields">
      {fields.map(({ id, title, unit }) => (
        <button
          key={id}
          type="button"
          className="part-row"
          aria-pressed={id === at}
          onClick={() => onPick(id)}
        >
          <span className="part-title">{title}</span>
          <span className="figure">
            {input.values[id] === undefined || input.values[id] === '' ? '–' : input.values[id]}
            <span className="part-unit"> {unit}</span>
          </span>
        </button>
      ))}
    </div>
  );
}

function Answer({ sum, input }: { sum: Sum; input: SumInput }) {
  const answer = answerTo(sum, input);
  return (
    <section aria-label="Answer" className="sum-answer">
      <div role="status">
        {'why' in answer ? (
          <p className="sum-why">{answer.why}</p>
        ) : (
          <dl className="sum-lines">
            {answer.lines.map(({ title, value, unit, isMain }) => (
              <div key={`${title} ${unit}`} className="sum-line" data-main={isMain}>
                <dt>{title === '' ? <span className="unseen">in {unit}</span> : title}</dt>
                <dd className="figure">
                  {value}
                  <span className="part-unit"> {unit}</span>
                </dd>
              </div>
            ))}
          </dl>
        )}
      </div>
      {sum.note !== undefined && <p className="sum-note">{sum.note}</p>}
      <p className="sum-formula figure">{sum.formula}</p>
      <p className="text-soft">{sum.source}</p>
    </section>
  );
}

function firstEmpty(fields: readonly SumField[], { values }: SumInput): SumField | undefined {
  return fields.find(({ id }) => (values[id] ?? '') === '');
}

function nextOf(fields: readonly SumField[], present: SumField): SumField {
  return fields[(fields.indexOf(present) + 1) % fields.length] ?? present;
}

function watchAddress(onChange: () => void): () => void {
  addEventListener('hashchange', onChange);
  return () => removeEventListener('hashchange', onChange);
}

function readAddress(): string {
  return location.hash.slice(1);
}
