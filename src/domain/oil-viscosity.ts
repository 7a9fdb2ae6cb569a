/** A viscosity (mm²/s) that was measured or is printed for a temperature (°C). */
export interface ViscosityPoint {
  temperature: number;
  kinematic: number;
}

/** A limit of the low-temperature tests: at most so many mPa·s at so many °C. */
export interface ColdLimit {
  maximum: number;
  temperature: number;
}

/** What SAE J300 asks of an oil of a grade. */
export interface GradeLimits {
  /** mm²/s at 100 °C; the limit itself still counts. */
  kv100Min: number;
  /** mm²/s at 100 °C; the limit itself no longer counts. */
  kv100Max?: number;
  /** At least so many mPa·s at 150 °C and high shear. */
  hths?: number;
  /** Cranking. */
  ccs?: ColdLimit;
  /** Pumping, without yield stress. */
  mrv?: ColdLimit;
}

/** What the equations and charts of ASTM D341 span, mm²/s and °C; from memory. */
const THINNEST = 0.21;
const THICKEST = 2e7;
const COLDEST = -70;
const HOTTEST = 370;
const ZERO_CELSIUS = 273.15;

/**
 * Kinematic viscosity (mm²/s) of an oil at a temperature (°C) from two points in any order: ASTM D341,
 * log log Z = A − B·log T, T in kelvin. Between 0.21 and 2·10⁷ mm²/s and −70 and 370 °C; the hotter point must be
 * the thinner one. An estimate outside the two points and near the cloud point. Source: ASTM D341-03,
 * equations 1 and 2, as the user guide of a pipeline calculator prints them.
 */
export function viscosityAt(oil: {
  points: readonly [ViscosityPoint, ViscosityPoint];
  temperature: number;
}): number {
  const [cold, hot] = oil.points.toSorted((a, b) => a.temperature - b.temperature).map(lineCoordinates);
  const x = logKelvin(oil.temperature);
  if (cold === undefined || hot === undefined) {
    throw new RangeError('Two points of viscosity are needed.');
  }
  if (!(cold.x < hot.x && cold.y > hot.y)) {
    throw new RangeError('The oil must be thinner at the hotter of two different temperatures.');
  }
  const y = cold.y + ((x - cold.x) / (hot.x - cold.x)) * (hot.y - cold.y);
  const viscosity = viscosityOfZ(10 ** (10 ** y));
  if (!(viscosity >= THINNEST && viscosity <= THICKEST)) {
    throw new RangeError('At that temperature the equation no longer holds for this oil.');
  }
  return viscosity;
}

function lineCoordinates({ temperature, kinematic }: ViscosityPoint): { x: number; y: number } {
  if (!(kinematic >= THINNEST && kinematic <= THICKEST)) {
    throw new RangeError('A viscosity must lie between 0.21 and 20 000 000 mm²/s.');
  }
  return { x: logKelvin(temperature), y: Math.log10(Math.log10(zOf(kinematic))) };
}

function logKelvin(temperature: number): number {
  if (!(temperature >= COLDEST && temperature <= HOTTEST)) {
    throw new RangeError(`The temperature of an oil must lie between ${COLDEST} and ${HOTTEST} °C.`);
  }
  return Math.log10(temperature + ZERO_CELSIUS);
}

function zOf(viscosity: number): number {
  return viscosity + 0.7 + thinOilTerm(viscosity);
}

/** Without it the line bends for oils thinner than 2 mm²/s. */
function thinOilTerm(viscosity: number): number {
  return Math.exp(-1.47 - 1.84 * viscosity - 0.51 * viscosity ** 2);
}

/** The viscosity that has this Z, to the last digits; the standard's own inverse is good to three. */
function viscosityOfZ(z: number): number {
  let viscosity = z - 0.7;
  // Every round brings it nearer by a factor of three or more.
  for (let round = 0; round < 40; round += 1) viscosity = z - 0.7 - thinOilTerm(viscosity);
  return viscosity;
}

/** SAE J300: winter grades. */
const WINTER_GRADES: Readonly<Record<string, { kv100Min: number; ccs: ColdLimit; mrv: ColdLimit }>> = {
  '0W': winter(3.8, 6200, -35),
  '5W': winter(3.8, 6600, -30),
  '10W': winter(4.1, 7000, -25),
  '15W': winter(5.6, 7000, -20),
  '20W': winter(5.6, 9500, -15),
  '25W': winter(9.3, 13_000, -10),
};

/** SAE J300: grades at working temperature. */
const SUMMER_GRADES: Readonly<Record<string, { kv100Min: number; kv100Max: number; hths: number }>> = {
  '8': { kv100Min: 4, kv100Max: 6.1, hths: 1.7 },
  '12': { kv100Min: 5, kv100Max: 7.1, hths: 2 },
  '16': { kv100Min: 6.1, kv100Max: 8.2, hths: 2.3 },
  '20': { kv100Min: 6.9, kv100Max: 9.3, hths: 2.6 },
  '30': { kv100Min: 9.3, kv100Max: 12.5, hths: 2.9 },
  '40': { kv100Min: 12.5, kv100Max: 16.3, hths: 3.7 },
  '50': { kv100Min: 16.3, kv100Max: 21.9, hths: 3.7 },
  '60': { kv100Min: 21.9, kv100Max: 26.1, hths: 3.7 },
};

/** A 40 with one of these before it need not be as thick at high shear. */
const THIN_FORTIES = ['0W', '5W', '10W'];
const THIN_FORTY_HTHS = 3.5;

/**
 * What SAE J300 (2015 and later) asks of an oil of a grade: "5W", "30" or "5W-30". Viscosities at 100 °C in
 * mm²/s, the others in mPa·s. Refuses what is no grade, and pairs that no oil can meet.
 */
export function gradeLimits(grade: string): GradeLimits {
  const [whole, cold, hotOfTwo, hotAlone] = /^(?:(\d+W)(?:-(\d+))?|(\d+))$/.exec(grade) ?? [];
  const hot = hotOfTwo ?? hotAlone;
  const winterLimits = limitsOf(WINTER_GRADES, cold);
  const summerLimits = limitsOf(SUMMER_GRADES, hot);
  if (whole === undefined || winterLimits === null || summerLimits === null) {
    throw new RangeError(`"${grade}" is not an SAE J300 grade.`);
  }
  const kv100Min = Math.max(winterLimits?.kv100Min ?? 0, summerLimits?.kv100Min ?? 0);
  if (summerLimits !== undefined && kv100Min >= summerLimits.kv100Max) {
    throw new RangeError(`No oil can be a ${grade}: its two halves ask for different viscosities.`);
  }
  const thinForty = hot === '40' && cold !== undefined && THIN_FORTIES.includes(cold);
  return {
    ...winterLimits,
    ...summerLimits,
    kv100Min,
    ...(thinForty ? { hths: THIN_FORTY_HTHS } : {}),
  };
}

/** The pumping limit is set five degrees below the cranking one. */
function winter(
  kv100Min: number,
  cranking: number,
  temperature: number,
): { kv100Min: number; ccs: ColdLimit; mrv: ColdLimit } {
  return {
    kv100Min,
    ccs: { maximum: cranking, temperature },
    mrv: { maximum: 60_000, temperature: temperature - 5 },
  };
}

/** Undefined where the half is not written, null where there is no such grade. */
function limitsOf<T>(grades: Readonly<Record<string, T>>, half: string | undefined): T | null | undefined {
  if (half === undefined) return undefined;
  return Object.hasOwn(grades, half) ? (grades[half] ?? null) : null;
}
