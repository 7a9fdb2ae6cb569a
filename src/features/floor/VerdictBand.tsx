import type { ReactNode } from 'react';
import { QuietButton } from '@/components/QuietButton';
import { Verdict } from '@/components/Verdict';
import { VerdictScale } from '@/components/VerdictScale';
import { besideSI } from '@/domain/second-unit';
import { clockTime } from '@/domain/time-words';
import { limitOnScale } from './gauge-reading';
import { lastReading, type LastReading } from './last-reading';
import { useRun } from './run-context';

/**
 * The reading that was just kept, with its verdict, over the next screen until something is recorded there;
 * something else where the last act was no reading.
 */
export function VerdictBand({ otherwise }: { otherwise: ReactNode }) {
  const run = useRun();
  const reading = lastReading(run.state);
  if (!reading) return otherwise;
  const { kept, values, unit, verdict, word, words } = reading;
  return (
    <section className="verdict-band" aria-label="The reading just kept" data-kind={verdict}>
      <div className="verdict-band-values">
        {values.map(({ label, value }) => (
          <p key={label} className="verdict-band-value">
            <span className="form-label">{label}</span>
            <span className="figure">
              {value}
              {unit !== '' && <span className="verdict-band-unit"> {unit}</span>}
              <Beside value={value} unit={unit} />
            </span>
          </p>
        ))}
      </div>
      <Verdict kind={verdict} word={word} size="band">
        {words}
      </Verdict>
      <BandScale reading={reading} />
      <div className="verdict-band-end">
        <p className="floor-done">
          kept {clockTime(kept.at, run.workshop.zone)}, {run.whereIs(kept.id)}
        </p>
        <QuietButton shape="wide" label="Take back" onPress={() => run.openSheet('take back')} />
      </div>
    </section>
  );
}

function Beside({ value, unit }: { value: string; unit: string }) {
  const beside = besideSI(useRun().workshop.secondUnits, value, unit);
  return beside === undefined ? null : <span className="verdict-band-beside">{beside}</span>;
}

function BandScale({ reading: { values, limit, isClearance } }: { reading: LastReading }) {
  if (!limit || (limit.low === undefined && limit.high === undefined)) return null;
  return (
    <VerdictScale
      label={`Between ${limit.low ?? 'no lower limit'} and ${limit.high ?? 'no upper limit'} ${limit.unit}`}
      low={limitOnScale(limit.low)}
      high={limitOnScale(limit.high)}
      target={limit.target === undefined ? undefined : Number(limit.target)}
      ends={isClearance ? ['tight', 'wide'] : undefined}
      marks={values.map(({ number, uncertainty }, i) => ({ value: number, uncertainty, isOpen: i === 1 }))}
    />
  );
}
