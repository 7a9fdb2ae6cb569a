import { filmFor, gradeLimits, sommerfeld, viscosityAt } from './oil-film';
import { requirePositive } from './number-checks';

/*
 * What a clearance means at given conditions: an estimate for whoever wants to see why a limit is where it is. A
 * rod bearing is loaded by strokes, bends, wears and warms: the figures are of a round, unworn bearing under a
 * steady load in oil of one temperature. Nothing is judged by them.
 */

/** What is assumed of a big end at work. */
export interface FilmConditions {
  /** Crankpin diameter and width of the shell that carries, mm. */
  diameter: number;
  width: number;
  /** Rev/min. */
  speed: number;
  /** Load over diameter times width, MPa (N/mm²). */
  unitLoad: number;
  /** °C, of the oil in the film. */
  temperature: number;
  /** SAE J300, such as "5W-30". */
  grade: string;
}

/** How the film would stand. */
export interface FilmEstimate {
  /** Dynamic viscosity of the oil in the film, mPa·s. */
  viscosity: number;
  sommerfeld: number;
  /** Thinnest film, µm. */
  film: number;
  /** Thinnest film over radial clearance, and from the load round to it, degrees. */
  filmRatio: number;
  attitudeAngle: number;
  /** Heat made by friction, W. */
  friction: number;
  /** Oil that leaves at the sides and has to come in, L/min. */
  flow: number;
}

/** kg/L of engine oil when warm. Common practice, no source. */
const DENSITY = 0.82;
/** An oil is so many times thicker at 40 °C than at 100 °C: common multigrades, from memory. */
const THICKER_AT_40 = 6;
/** A single grade has no upper viscosity where it is a W grade alone: so much above its lower one. */
const WIDE_OF_W = 1.2;

/**
 * The film of an oil clearance (mm, on the diameter) at some conditions. Refuses what is not above zero, a grade
 * that is none, and a load that the tables do not reach: then the film is thinner than they go. An estimate.
 * Source: `oil-film.ts` for its parts; the oil is taken at the middle of its grade.
 */
export function estimateFilm(clearance: number, conditions: FilmConditions): FilmEstimate {
  requirePositive(clearance, 'clearance');
  const { diameter, width, speed, unitLoad, temperature } = conditions;
  requirePositive(diameter, 'crankpin diameter');
  requirePositive(width, 'width of the shell');
  requirePositive(speed, 'speed');
  requirePositive(unitLoad, 'load');
  const viscosity = oilViscosity(conditions.grade, temperature);
  const radius = diameter / 2;
  const radialClearance = clearance / 2;
  const turns = speed / 60;
  const number = sommerfeld({
    viscosity: viscosity / 1000,
    speed: turns,
    unitLoad: unitLoad * 1e6,
    radius,
    radialClearance,
  });
  const state = filmFor({ sommerfeld: number, lengthToDiameter: width / diameter });
  const frictionForce = state.frictionVariable * (radialClearance / radius) * unitLoad * diameter * width;
  const round = state.flowVariable * radius * radialClearance * turns * width;
  return {
    viscosity,
    sommerfeld: number,
    film: state.minimumFilmRatio * radialClearance * 1000,
    filmRatio: state.minimumFilmRatio,
    attitudeAngle: state.attitudeAngle,
    friction: (frictionForce * 2 * Math.PI * turns * radius) / 1000,
    flow: (round * state.sideFlowRatio * 60) / 1e6,
  };
}

/** The grade that a specification names, such as "5W-30" in "Oil class M4, 5W-30"; undefined where there is none. */
export function gradeIn(specification: string): string | undefined {
  return /\b\d{1,2}W-\d{2}\b/.exec(specification)?.[0];
}

/** mPa·s of an oil in the middle of its grade at a temperature (°C). */
function oilViscosity(grade: string, temperature: number): number {
  const { kv100Min, kv100Max = kv100Min * WIDE_OF_W } = gradeLimits(grade);
  const hot = (kv100Min + kv100Max) / 2;
  const kinematic = viscosityAt({
    points: [
      { temperature: 40, kinematic: hot * THICKER_AT_40 },
      { temperature: 100, kinematic: hot },
    ],
    temperature,
  });
  return kinematic * DENSITY;
}
