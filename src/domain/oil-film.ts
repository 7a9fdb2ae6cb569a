import { valueOnCurve } from './monotone-curve';
import { requirePositive } from './number-checks';

export { gradeLimits, viscosityAt, type GradeLimits, type ViscosityPoint } from './oil-viscosity';

/*
 * Estimates for the panel that says what a clearance means. They are for a round, unworn, full bearing with oil
 * of one temperature under a steady load, which no rod bearing is: they explain, and no reading is judged by them.
 */

/** How the oil film in a full bearing stands (see `filmFor`); all without unit but the angle. */
export interface FilmState {
  /** h₀/c: thinnest film over radial clearance; 1 is a journal in the middle. */
  minimumFilmRatio: number;
  /** f·r/c, with the coefficient of friction f at the journal. */
  frictionVariable: number;
  /** Q/(r·c·N·l), with the oil Q that goes round. */
  flowVariable: number;
  /** Qs/Q: the part of it that leaves at the sides. */
  sideFlowRatio: number;
  /** φ, degrees, from the load to the thinnest film. */
  attitudeAngle: number;
  /** P/pmax: unit load over the highest pressure in the film. */
  pressureRatio: number;
}

/** S and then h₀/c, φ, f·r/c, Q/(r·c·N·l), Qs/Q and P/pmax, from the heaviest load to the lightest. */
type Row = readonly [number, number, number, number, number, number, number];

interface FilmTable {
  /** d/l, 0 for a bearing without end. */
  diameterToLength: number;
  rows: readonly Row[];
  /** φ and P/pmax as the load vanishes. */
  unloaded: { attitudeAngle: number; pressureRatio: number };
}

/*
 * Raimondi and Boyd, A solution for the finite journal bearing III, Trans. ASLE 1 (1958), full bearing; all from
 * memory. They leave P/pmax without load empty: that limit comes from solving Reynolds' equation.
 */
const TABLES: readonly FilmTable[] = [
  {
    diameterToLength: 0,
    rows: [
      [0.0115, 0.1, 31.62, 0.756, 0.411, 0, 0.358],
      [0.021, 0.2, 42.22, 0.961, 0.76, 0, 0.495],
      [0.0389, 0.4, 54.31, 1.2, 1.56, 0, 0.667],
      [0.0626, 0.6, 61.94, 1.52, 2.26, 0, 0.764],
      [0.123, 0.8, 67.26, 2.57, 2.83, 0, 0.814],
      [0.24, 0.9, 69.1, 4.8, 3.03, 0, 0.826],
    ],
    unloaded: { attitudeAngle: 70.92, pressureRatio: 0.83 },
  },
  {
    diameterToLength: 1,
    rows: [
      [0.00474, 0.03, 15.47, 0.514, 4.82, 0.973, 0.152],
      [0.0188, 0.1, 26.45, 1.05, 4.74, 0.919, 0.247],
      [0.0446, 0.2, 36.24, 1.7, 4.62, 0.842, 0.313],
      [0.121, 0.4, 50.58, 3.22, 4.33, 0.68, 0.415],
      [0.264, 0.6, 63.1, 5.79, 3.99, 0.497, 0.484],
      [0.631, 0.8, 74.02, 12.8, 3.59, 0.28, 0.529],
      [1.33, 0.9, 79.5, 26.4, 3.37, 0.15, 0.54],
    ],
    unloaded: { attitudeAngle: 85, pressureRatio: 0.542 },
  },
  {
    diameterToLength: 2,
    rows: [
      [0.00609, 0.03, 13.75, 0.61, 5.88, 0.98, 0.126],
      [0.0313, 0.1, 23.66, 1.6, 5.69, 0.939, 0.206],
      [0.0923, 0.2, 33.31, 3.26, 5.41, 0.874, 0.267],
      [0.319, 0.4, 48.14, 8.1, 4.85, 0.73, 0.365],
      [0.779, 0.6, 61.45, 17, 4.29, 0.552, 0.441],
      [2.03, 0.8, 74.94, 40.9, 3.72, 0.318, 0.506],
      [4.31, 0.9, 81.62, 85.6, 3.43, 0.173, 0.523],
    ],
    unloaded: { attitudeAngle: 88.5, pressureRatio: 0.528 },
  },
  {
    diameterToLength: 4,
    rows: [
      [0.0101, 0.03, 12.22, 0.922, 6.12, 0.984, 0.108],
      [0.0736, 0.1, 21.85, 3.5, 5.91, 0.945, 0.18],
      [0.261, 0.2, 31.04, 8.8, 5.6, 0.884, 0.24],
      [1.07, 0.4, 46.72, 26.7, 4.99, 0.746, 0.334],
      [2.83, 0.6, 60.86, 61.1, 4.37, 0.567, 0.415],
      [7.57, 0.8, 75.18, 153, 3.76, 0.33, 0.489],
      [16.2, 0.9, 82.31, 322, 3.45, 0.18, 0.515],
    ],
    unloaded: { attitudeAngle: 89.5, pressureRatio: 0.524 },
  },
];

/**
 * Sommerfeld number of a plain bearing: (r/c)²·μN/P. Viscosity Pa·s, speed rev/s, unit load (load over length
 * times diameter) Pa, radius and radial clearance in one unit of length; all greater than zero.
 */
export function sommerfeld(bearing: {
  viscosity: number;
  speed: number;
  unitLoad: number;
  radius: number;
  radialClearance: number;
}): number {
  requireBearing(bearing);
  const { viscosity, speed, unitLoad, radius, radialClearance } = bearing;
  return (radius / radialClearance) ** 2 * ((viscosity * speed) / unitLoad);
}

/**
 * Coefficient of friction of a bearing that runs without load in the middle: 2π²·(μN/P)·(r/c). Units as for
 * `sommerfeld`. An estimate. Source: Petroff's equation, Shigley ch. 12, from memory.
 */
export function petroffFriction(bearing: {
  viscosity: number;
  speed: number;
  unitLoad: number;
  radius: number;
  radialClearance: number;
}): number {
  requireBearing(bearing);
  const { viscosity, speed, unitLoad, radius, radialClearance } = bearing;
  return 2 * Math.PI ** 2 * ((viscosity * speed) / unitLoad) * (radius / radialClearance);
}

/**
 * The oil film of a full bearing by its Sommerfeld number and length over diameter, which is 1/4 or more
 * (`Infinity` for no side flow). Estimates from the tables of Raimondi and Boyd (1958): between rows on the
 * logarithm of S, between tables by their formula for any l/d. Lighter loads than the tables have run out to a
 * bearing without load; heavier ones (S below the first row of a table that is used) are refused. Between the
 * tables h₀/c is good to about 0.04 and the friction to 3 %; the share of side flow is only a rough guide there.
 */
export function filmFor(bearing: { sommerfeld: number; lengthToDiameter: number }): FilmState {
  requirePositive(bearing.sommerfeld, 'Sommerfeld number');
  if (!(bearing.lengthToDiameter >= 0.25)) {
    throw new RangeError('The length of the bearing must be a quarter of its diameter or more.');
  }
  const films = weightedTables(1 / bearing.lengthToDiameter).map(({ table, weight }) => ({
    weight,
    film: filmByTable(table, bearing.sommerfeld),
  }));
  const blend = (quantity: keyof FilmState): number =>
    films.reduce((sum, { weight, film }) => sum + weight * film[quantity], 0);
  return {
    minimumFilmRatio: blend('minimumFilmRatio'),
    frictionVariable: blend('frictionVariable'),
    flowVariable: blend('flowVariable'),
    // Between the tables the cubic strays a little past what a share can be.
    sideFlowRatio: Math.min(1, Math.max(0, blend('sideFlowRatio'))),
    attitudeAngle: blend('attitudeAngle'),
    pressureRatio: blend('pressureRatio'),
  };
}

/**
 * The tables that a bearing of this d/l lies between, and their weights. Raimondi and Boyd's formula, which they
 * write in l/d, is the cubic in d/l through all four.
 */
function weightedTables(diameterToLength: number): { table: FilmTable; weight: number }[] {
  return TABLES.map((table) => {
    const weight = TABLES.filter((other) => other !== table).reduce(
      (product, other) =>
        (product * (diameterToLength - other.diameterToLength)) /
        (table.diameterToLength - other.diameterToLength),
      1,
    );
    return { table, weight };
  }).filter(({ weight }) => weight !== 0);
}

function filmByTable(table: FilmTable, sommerfeld: number): FilmState {
  const [heaviest, lightest] = [table.rows[0], table.rows.at(-1)];
  if (heaviest === undefined || lightest === undefined) throw new RangeError('The table has no rows.');
  if (sommerfeld < heaviest[0]) {
    throw new RangeError('The load is too heavy for the tables: almost no oil film would be left.');
  }
  if (sommerfeld > lightest[0]) return filmUnderLightLoad(table, lightest, sommerfeld);
  const at = (valueOf: (row: Row) => number): number =>
    valueOnCurve(
      table.rows.map((row) => ({ x: Math.log(row[0]), y: valueOf(row) })),
      Math.log(sommerfeld),
    );
  return {
    minimumFilmRatio: at((row) => row[1]),
    attitudeAngle: at((row) => row[2]),
    frictionVariable: sommerfeld * Math.exp(at((row) => Math.log(row[3] / row[0]))),
    flowVariable: at((row) => row[4]),
    sideFlowRatio: at((row) => row[5]),
    pressureRatio: at((row) => row[6]),
  };
}

/** Past the last row the eccentricity goes with the load, and with it all but the friction, by its square. */
function filmUnderLightLoad(table: FilmTable, [S, h, phi, f, Q, Qs, P]: Row, sommerfeld: number): FilmState {
  const load = S / sommerfeld;
  const towards = (limit: number, value: number): number => limit + (value - limit) * load;
  const petroff = 2 * Math.PI ** 2;
  return {
    minimumFilmRatio: towards(1, h),
    attitudeAngle: towards(table.unloaded.attitudeAngle, phi),
    frictionVariable: sommerfeld * (petroff + (f / S - petroff) * load ** 2),
    flowVariable: towards(Math.PI, Q),
    sideFlowRatio: towards(0, Qs),
    pressureRatio: towards(table.unloaded.pressureRatio, P),
  };
}

function requireBearing(bearing: {
  viscosity: number;
  speed: number;
  unitLoad: number;
  radius: number;
  radialClearance: number;
}): void {
  requirePositive(bearing.viscosity, 'viscosity');
  requirePositive(bearing.speed, 'speed');
  requirePositive(bearing.unitLoad, 'unit load');
  requirePositive(bearing.radius, 'radius');
  requirePositive(bearing.radialClearance, 'radial clearance');
}
