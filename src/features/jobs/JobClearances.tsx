import { ClearanceScale } from '@/components/ClearanceScale';
import { clearanceLimit } from '@/domain/engine-view';
import type { ClearanceReading, JobState } from '@/domain/job-state';
import { rodsOf } from '@/domain/plan';
import { conformityProbability, mean, range, sampleSd } from '@/domain/statistics';
import { JobPredictions } from './JobPredictions';

/** Every rod's clearance between tight and wide, front and rear, so that the odd one shows. */
export function JobClearances({ state }: { state: JobState }) {
  const limit = clearanceLimit(state);
  const rods = rodsOf(state.plan).map((rod) => ({ rod, readings: state.rods[rod] }));
  if (!limit || rods.every(({ readings }) => !readings?.front && !readings?.rear)) return null;
  const { low, high, target } = limit;
  return (
    <section className="part">
      <h2 className="part-title">Oil clearance</h2>
      <ClearanceScale
        unit={limit.unit}
        {...(low === undefined ? {} : { low: figure(low) })}
        {...(high === undefined ? {} : { high: figure(high) })}
        {...(target === undefined ? {} : { target: figure(target) })}
        rods={rods.map(({ rod, readings }) => ({
          rod: String(rod),
          ...(readings?.front ? { front: reading(readings.front) } : {}),
          ...(readings?.rear ? { rear: reading(readings.rear) } : {}),
          ...(readings?.front || readings?.rear ? {} : { words: 'waiting' }),
        }))}
      />
      <ClearanceWords state={state} low={low} high={high} unit={limit.unit} />
      <JobPredictions state={state} unit={limit.unit} />
    </section>
  );
}

interface ClearanceWordsProps {
  state: JobState;
  low: string | undefined;
  high: string | undefined;
  unit: string;
}

/** How the readings lie together, and how sure the one nearest to a limit is. */
function ClearanceWords({ state, low, high, unit }: ClearanceWordsProps) {
  const readings = rodsOf(state.plan).flatMap((rod) =>
    (['front', 'rear'] as const).flatMap((end) => {
      const read = state.rods[rod]?.[end];
      return read ? [{ where: `rod ${rod}, ${end}`, ...read, value: Number(read.clearance) }] : [];
    }),
  );
  if (readings.length < 2) return null;
  const values = readings.map(({ value }) => value);
  const limits = { ...given('low', low), ...given('high', high) };
  const sure = readings
    .filter(({ uncertainty }) => Number(uncertainty) > 0)
    .map((read) => ({
      ...read,
      // The card's uncertainty is the whole range within which the reading lies: twice the standard one.
      probability: conformityProbability({
        value: read.value,
        standardUncertainty: Number(read.uncertainty) / 2,
        ...limits,
      }),
    }))
    .toSorted((a, b) => a.probability - b.probability);
  const [least] = 'low' in limits || 'high' in limits ? sure : [];
  return (
    <div className="pt-3">
      <p>
        {readings.length} readings: mean <b className="figure">{mean(values).toFixed(4)}</b> {unit}, spread{' '}
        <b className="figure">{range(values).toFixed(3)}</b> {unit}, standard deviation{' '}
        <b className="figure">{sampleSd(values).toFixed(4)}</b> {unit}.
      </p>
      {least && (
        <p className="text-soft">
          Least sure: {least.where}, <span className="figure">{least.clearance}</span> {unit}, inside its
          limits with a probability of <span className="figure">{percent(least.probability)}</span> %. The
          verdict is by its guard bands, not by this.
        </p>
      )}
    </div>
  );
}

function given(name: 'low' | 'high', text: string | undefined): { low?: number; high?: number } {
  return text === undefined ? {} : { [name]: Number(text) };
}

/** Never said to be certain: no measurement is. */
function percent(probability: number): string {
  return probability > 0.999 ? 'more than 99.9' : (probability * 100).toFixed(1);
}

function figure(text: string): { value: number; text: string } {
  return { value: Number(text), text };
}

function reading({ clearance, uncertainty }: ClearanceReading): {
  value: number;
  text: string;
  uncertainty: number;
} {
  return { ...figure(clearance), uncertainty: Number(uncertainty) };
}
