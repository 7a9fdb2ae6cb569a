import { useEffect, useState } from 'react';
import { ClearanceScale } from '@/components/ClearanceScale';
import { Sign } from '@/components/Sign';
import { evidenceFor } from '@/domain/job';
import { judgeLimit } from '@/domain/job-limit';
import { lastOf } from '@/domain/job-kept';
import type { JobState } from '@/domain/job-state';
import { findStep, rodsOf, type StepOf } from '@/domain/plan';
import { authorsUnder } from '@/domain/job-signing-rules';
import { dataOf } from '../done-words';
import { clearanceLimit } from '@/domain/engine-view';
import { limitOnScale, onScale } from '../gauge-reading';
import { useRun } from '../run-context';

/** What a hold point's signature stands on: readings, joints, photographs, deviations, and who did the work. */
export function HoldEvidence({ step }: { step: StepOf<'hold'> }) {
  const { state } = useRun();
  const evidence = evidenceFor(state, step.id);
  const names = authorsUnder(state, step).map((id) => state.people[id] ?? id);
  return (
    <div className="grid gap-6">
      <p className="text-lg">
        <span className="figure text-2xl font-semibold">{evidence.length}</span> entries
        {names.length > 0 && <>, by {names.join(', ')}</>}
      </p>
      <Deviations step={step} />
      <Joints step={step} />
      <Clearances step={step} />
      <Readings step={step} />
      <Photographs step={step} />
    </div>
  );
}

function Clearances({ step }: { step: StepOf<'hold'> }) {
  const { state } = useRun();
  const limit = clearanceLimit(state);
  const isCovered = step.covers.some((id) => findStep(state.plan, id)?.kind === 'gauge');
  if (!isCovered || !limit) return null;
  return (
    <section>
      <h2 className="form-label">{limit.title}</h2>
      <ClearanceScale
        unit={limit.unit}
        low={limitOnScale(limit.low)}
        high={limitOnScale(limit.high)}
        target={limitOnScale(limit.target)}
        rods={rodsOf(state.plan).map((rod) => ({
          rod: String(rod),
          front: onScale(state.rods[rod]?.front),
          rear: onScale(state.rods[rod]?.rear),
        }))}
      />
    </section>
  );
}

function Joints({ step }: { step: StepOf<'hold'> }) {
  const { state } = useRun();
  const joints = step.covers.flatMap((id) => {
    const covered = findStep(state.plan, id);
    return covered?.kind === 'tighten' && covered.fit !== 'measuring' && covered.fit !== 'interim'
      ? [covered]
      : [];
  });
  if (joints.length === 0) return null;
  return (
    <section>
      <h2 className="form-label">Tightened</h2>
      <ul className="grid gap-1 pt-1 text-lg @md/floor-main:grid-cols-2">
        {joints.map((joint) => {
          const status = state.steps[joint.id]?.status;
          const cycles = state.plan.programmes[joint.programme]?.cycles.length ?? 0;
          return (
            <li key={joint.id} className="flex items-center gap-2 border-b border-rule py-1">
              <Sign name={status === 'done' ? 'tick' : status === 'not applicable' ? 'minus' : 'ring'} />
              <span>
                {joint.title}: {status === 'done' ? (cycles > 1 ? `${cycles} cycles` : 'done') : status}
              </span>
            </li>
          );
        })}
      </ul>
    </section>
  );
}

function Readings({ step }: { step: StepOf<'hold'> }) {
  const { state } = useRun();
  const readings = step.covers.flatMap((id) => {
    const covered = findStep(state.plan, id);
    const kept = covered?.kind === 'read' ? lastOf(state.steps[id], 'read') : undefined;
    const limit = covered?.kind === 'read' ? state.plan.limits[covered.limit] : undefined;
    return covered && kept && limit ? [{ covered, kept, limit }] : [];
  });
  if (readings.length === 0) return null;
  return (
    <section>
      <h2 className="form-label">Read</h2>
      <ul className="grid gap-1 pt-1 text-lg @md/floor-main:grid-cols-2">
        {readings.map(({ covered, kept, limit }) => {
          const { verdict } = judgeLimit(limit, kept.data.value, limit.uncertainty ?? '0');
          return (
            <li
              key={covered.id}
              className="flex items-center justify-between gap-3 border-b border-rule py-1"
            >
              <span>{covered.title}</span>
              <span className="figure font-semibold">
                {kept.data.value} {kept.data.unit}, {verdict}
              </span>
            </li>
          );
        })}
      </ul>
    </section>
  );
}

function Deviations({ step }: { step: StepOf<'hold'> }) {
  const { state } = useRun();
  const covered = new Set(step.covers);
  const deviations = state.deviations.filter(
    (deviation) => deviation.step !== undefined && covered.has(deviation.step),
  );
  if (deviations.length === 0)
    return (
      <p className="flex items-center gap-2 text-lg">
        <Sign name="tick" />
        No deviation
      </p>
    );
  return (
    <section>
      <h2 className="form-label">Deviations</h2>
      <ul className="grid gap-1 pt-1 text-lg">
        {deviations.map((deviation) => (
          <li key={deviation.id} className="border-b border-rule py-1">
            <b>{deviation.disposed ? deviation.disposed.disposition : 'open'}:</b> {deviation.words}
            {deviation.disposed && (
              <span className="text-soft">
                {' '}
                ({deviation.disposed.name}: {deviation.disposed.reason})
              </span>
            )}
          </li>
        ))}
      </ul>
    </section>
  );
}

function Photographs({ step }: { step: StepOf<'hold'> }) {
  const { state } = useRun();
  const photos = photosOn(state, step);
  if (photos.length === 0) return null;
  return (
    <section>
      <h2 className="form-label">Photographs</h2>
      <ul className="flex flex-wrap gap-3 pt-1">
        {photos.map(({ photo, subject }) => (
          <li key={`${photo} ${subject}`}>
            <EvidencePhoto hash={photo} subject={subject} />
          </li>
        ))}
      </ul>
    </section>
  );
}

function photosOn(state: JobState, step: StepOf<'hold'>) {
  return step.covers.flatMap((id) =>
    (state.steps[id]?.entries ?? [])
      .filter(
        ({ kind, voided, takenBack }) =>
          kind === 'photographed' && voided === undefined && takenBack === undefined,
      )
      .map((kept) => dataOf(kept, 'photographed')),
  );
}

function EvidencePhoto({ hash, subject }: { hash: string; subject: string }) {
  const { photoUrl } = useRun();
  const [url, setUrl] = useState<string>();
  useEffect(() => {
    let made: string | undefined;
    let isGone = false;
    void photoUrl(hash).then((address) => {
      made = address;
      if (isGone && made !== undefined) URL.revokeObjectURL(made);
      else setUrl(address);
    });
    return () => {
      isGone = true;
      if (made !== undefined) URL.revokeObjectURL(made);
    };
  }, [hash, photoUrl]);
  return (
    <figure className="w-48">
      {url === undefined ? (
        <div className="grid h-36 place-items-center rounded-md border border-rule text-soft">
          not on this tablet
        </div>
      ) : (
        <img src={url} alt={subject} className="h-36 w-48 rounded-md border-2 border-strong object-cover" />
      )}
      <figcaption className="pt-1 text-sm text-soft">{subject}</figcaption>
    </figure>
  );
}
