import { useState } from 'react';
import { Keypad } from '@/components/Keypad';
import { MainAction } from '@/components/MainAction';
import { QuietButton } from '@/components/QuietButton';
import type { RodState } from '@/domain/job-state';
import type { StepOf } from '@/domain/plan';
import { whichReading, type End } from '../gauge-reading';
import { isNumber } from '../numbers';
import { NO_SIZES, PARTS, valueOfParts, type PartName, type PartSizes } from '../part-sizes';
import { RecordAction } from '../RecordAction';
import { StepFrame } from '../StepFrame';

const LONGEST_SIZE = 8;

interface GaugePartsProps {
  step: StepOf<'gauge'>;
  rod: RodState | undefined;
  end: End;
  onThread: () => void;
  onKept: () => void;
}

/** The clearance of one end by its parts, a size at a time; nothing is judged before it is kept. */
export function GaugeParts({ step, rod, end, onThread, onKept }: GaugePartsProps) {
  const [sizes, setSizes] = useState<PartSizes>(NO_SIZES);
  const [at, setAt] = useState<PartName>('housingBore');
  const part = PARTS.find(({ name }) => name === at) ?? PARTS[0];
  const next = PARTS.find(({ name }) => name !== at && !isNumber(sizes[name]));
  const { value, error } = valueOfParts(sizes);
  const present = rod?.[end];
  return (
    <StepFrame
      step={step}
      side={
        <Keypad
          key={at}
          label={part?.title ?? ''}
          unit="mm"
          maxLength={LONGEST_SIZE}
          value={sizes[at]}
          onChange={(size) => setSizes({ ...sizes, [at]: size })}
          error={error}
        />
      }
      heading={
        <div className="pb-4">
          <h1 className="floor-step">
            Rod {step.rod}, {end}: by its parts
          </h1>
          <p className="pt-1 text-lg text-soft">{part?.how}</p>
          {present && (
            <p className="text-lg text-soft">
              Read before: <span className="figure">{present.clearance}</span> mm, {present.verdict}.
            </p>
          )}
        </div>
      }
      isResult
      then={null}
      quiet={<QuietButton label="By thread" onPress={onThread} />}
      main={
        next ? (
          <MainAction
            label={`Next: ${next.short}`}
            why={isNumber(sizes[at]) ? undefined : `key in the ${part?.short ?? 'size'}`}
            onPress={() => setAt(next.name)}
          />
        ) : (
          <RecordAction
            label={value ? `Keep ${value.clearance} mm` : 'Keep the reading'}
            why={
              value
                ? undefined
                : isNumber(sizes[at])
                  ? 'look at the sizes again'
                  : `key in the ${part?.short ?? 'size'}`
            }
            drafts={() =>
              value
                ? [
                    {
                      kind: 'gauged',
                      step: step.id,
                      data: { end, ...value, unit: 'mm', again: whichReading(rod, end) },
                    },
                  ]
                : []
            }
            onRecorded={onKept}
          />
        )
      }
    >
      <Sum sizes={sizes} at={at} onPick={setAt} clearance={value?.clearance} />
    </StepFrame>
  );
}

interface SumProps {
  sizes: PartSizes;
  at: PartName;
  onPick: (name: PartName) => void;
  clearance: string | undefined;
}

/** The sum as it is written on paper: the bore, less what lies in it, and the clearance under the line. */
function Sum({ sizes, at, onPick, clearance }: SumProps) {
  return (
    <div className="part-sum">
      {PARTS.map(({ name, title }, index) => (
        <button
          key={name}
          type="button"
          className="part-row"
          aria-pressed={name === at}
          onClick={() => onPick(name)}
        >
          <span className="part-title">
            <span aria-hidden="true" className="figure part-sign">
              {index === 0 ? '' : '−'}
            </span>
            {index > 0 && <span className="unseen">less </span>}
            {title}
          </span>
          <span className="figure">{sizes[name] === '' ? '–' : sizes[name]}</span>
        </button>
      ))}
      <p className="part-row is-sum">
        <span className="part-title">
          <span aria-hidden="true" className="figure part-sign">
            =
          </span>
          {clearance === undefined ? 'clearance' : 'clearance, not kept yet'}
        </span>
        <span className="figure part-clearance">
          {clearance ?? '–.–––'}
          <span className="part-unit"> mm</span>
        </span>
      </p>
    </div>
  );
}
