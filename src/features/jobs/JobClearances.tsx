import { ClearanceScale } from '@/components/ClearanceScale';
import { clearanceLimit } from '@/domain/engine-view';
import type { ClearanceReading, JobState } from '@/domain/job-state';
import { rodsOf } from '@/domain/plan';

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
    </section>
  );
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
