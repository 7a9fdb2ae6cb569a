import { useId, useState } from 'react';
import { TextField } from '@/components/TextField';
import { clearanceLimit } from '@/domain/engine-view';
import { estimateFilm, type FilmEstimate, gradeIn } from '@/domain/film-estimate';
import type { JobState } from '@/domain/job-state';
import { mean } from '@/domain/statistics';
import { FilmDrawing } from './FilmDrawing';

const ASSUMPTIONS = [
  { name: 'speed', label: 'Speed', unit: 'rev/min', first: '3000' },
  { name: 'unitLoad', label: 'Load on the shell', unit: 'MPa', first: '6' },
  { name: 'temperature', label: 'Oil in the film', unit: '°C', first: '100' },
] as const;

type Assumption = (typeof ASSUMPTIONS)[number]['name'];

/** "What this clearance means": an estimate of the oil film at the limits and at the mean of the readings. */
export function JobFilm({ state }: { state: JobState }) {
  const id = useId();
  const [assumed, setAssumed] = useState<Record<Assumption, string>>(() => ({
    ...{ speed: '', unitLoad: '', temperature: '' },
    ...Object.fromEntries(ASSUMPTIONS.map(({ name, first }) => [name, first])),
  }));
  const { bearing } = state.plan.engine;
  const grade = gradeIn(state.plan.fluids.engineOil?.specification ?? '');
  const clearances = clearancesOf(state);
  if (bearing === undefined || grade === undefined || clearances.length === 0) return null;
  const conditions = {
    diameter: Number(bearing.diameter),
    width: Number(bearing.width),
    speed: numberIn(assumed.speed),
    unitLoad: numberIn(assumed.unitLoad),
    temperature: numberIn(assumed.temperature),
    grade,
  };
  return (
    <section className="part job-film" aria-labelledby={id}>
      <h2 className="part-title" id={id}>
        What this clearance means
      </h2>
      <p className="job-film-warning">An estimate, and no limit. Nothing is passed or failed by it.</p>
      <div className="job-film-columns">
        {clearances.map(({ name, value }) => (
          <FilmColumn key={name} name={name} clearance={value} film={tryEstimate(value, conditions)} />
        ))}
      </div>
      <details className="job-film-assumed">
        <summary>What is assumed</summary>
        <div className="job-film-fields">
          {ASSUMPTIONS.map(({ name, label, unit }) => (
            <TextField
              key={name}
              label={label}
              unit={unit}
              isFigure
              inputMode="decimal"
              value={assumed[name]}
              onChange={(event) => setAssumed({ ...assumed, [name]: event.target.value })}
            />
          ))}
        </div>
        <p>
          Pin {bearing.diameter} mm, shell {bearing.width} mm wide, from the engine sheet; oil in the middle
          of grade {grade} (SAE J300), six times thicker at 40 °C than at 100 °C, 0.82 kg/L. A round, unworn
          bearing under a steady load, its oil of one temperature: no big end is. Tables of Raimondi and Boyd
          (1958); viscosity by ASTM D341.
        </p>
      </details>
    </section>
  );
}

type Tried = { film: FilmEstimate } | { why: string };

function FilmColumn({ name, clearance, film }: { name: string; clearance: number; film: Tried }) {
  return (
    <div className="job-film-column">
      <h3>
        {name}
        <span className="figure">{clearance.toFixed(3)} mm</span>
      </h3>
      {'why' in film ? (
        <p className="text-soft">{film.why}</p>
      ) : (
        <>
          <FilmDrawing ratio={film.film.filmRatio} angle={film.film.attitudeAngle} />
          <dl>
            <Line label="Thinnest film" value={film.film.film.toFixed(1)} unit="µm" />
            <Line label="Oil through it" value={film.film.flow.toFixed(2)} unit="L/min" />
            <Line label="Heat of friction" value={film.film.friction.toFixed(0)} unit="W" />
          </dl>
        </>
      )}
    </div>
  );
}

function Line({ label, value, unit }: { label: string; value: string; unit: string }) {
  return (
    <div>
      <dt>{label}</dt>
      <dd className="figure">
        {value} {unit}
      </dd>
    </div>
  );
}

/** The limits, and between them the mean of every reading that counts. */
function clearancesOf(state: JobState): { name: string; value: number }[] {
  const limit = clearanceLimit(state);
  const readings = Object.values(state.rods).flatMap(({ front, rear }) =>
    [front, rear].flatMap((reading) => (reading ? [Number(reading.clearance)] : [])),
  );
  if (readings.length === 0) return [];
  return [
    ...(limit?.low === undefined ? [] : [{ name: 'Tight limit', value: Number(limit.low) }]),
    {
      name: readings.length === 1 ? 'The reading' : `Mean of ${readings.length} readings`,
      value: mean(readings),
    },
    ...(limit?.high === undefined ? [] : [{ name: 'Wide limit', value: Number(limit.high) }]),
  ];
}

function tryEstimate(clearance: number, conditions: Parameters<typeof estimateFilm>[1]): Tried {
  try {
    return { film: estimateFilm(clearance, conditions) };
  } catch (error) {
    if (error instanceof RangeError) return { why: error.message };
    throw error;
  }
}

/** A comma is a decimal point too; what is no number refuses itself. */
function numberIn(text: string): number {
  return text.trim() === '' ? Number.NaN : Number(text.trim().replace(',', '.'));
}
