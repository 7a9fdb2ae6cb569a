import { requireFinite, requireNotNegative, requirePositive } from './number-checks';

/*
 * What a bolt carries and how torque, angle and stretch go together. The preloads are estimates that explain
 * a programme: friction alone moves them by a quarter either way, so nothing is passed or failed by them.
 */

/** A metric ISO thread: nominal diameter and pitch, mm. */
export interface Thread {
  diameter: number;
  pitch: number;
}

/** The property classes of high-strength bolts. */
export type PropertyClass = '8.8' | '10.9' | '12.9';

/** Nut factors from the one that gives the least friction to the one that gives the most. */
export interface NutFactorRange {
  low: number;
  likely: number;
  high: number;
}

/** A preload (N) that is estimated from a torque. */
export interface PreloadEstimate {
  low: number;
  likely: number;
  high: number;
}

/** Nut factors by the state of the thread. Source: Shigley, Mechanical Engineering Design, 9th ed., table 8-15. */
export const NUT_FACTORS = {
  'black, not plated': 0.3,
  'zinc-plated': 0.2,
  lubricated: 0.18,
  'cadmium-plated': 0.16,
} as const satisfies Record<string, number>;

/** How far a preload set by a torque wrench strays from the likely one (bolted-joint practice: ± 25 %). */
const TORQUE_SCATTER = 0.25;

/** MPa, by class and by the largest diameter (mm) that it holds for: ISO 898-1:2013 table 3, from memory. */
const STRESSES: Record<PropertyClass, readonly { upTo: number; proof: number; tensile: number }[]> = {
  '8.8': [
    { upTo: 16, proof: 580, tensile: 800 },
    { upTo: 39, proof: 600, tensile: 830 },
  ],
  '10.9': [{ upTo: 39, proof: 830, tensile: 1040 }],
  '12.9': [{ upTo: 39, proof: 970, tensile: 1220 }],
};
const SMALLEST_DIAMETER = 1.6;

/** Half the angle between the flanks of a metric thread, as its secant. */
const FLANK_SECANT = 1 / Math.cos(Math.PI / 6);

/**
 * Nominal stress area (mm²) of a thread: π/4 · ((d2 + d3)/2)², with pitch diameter d2 = d − 0.649519 P and minor
 * diameter d3 = d − 1.226869 P. Refuses a pitch that leaves no core. Source: ISO 898-1 clause 9.1.6.1; ISO 724.
 */
export function stressArea(thread: Thread): number {
  const minor = thread.diameter - 1.226869 * thread.pitch;
  const mean = (pitchDiameter(thread) + minor) / 2;
  if (minor <= 0) throw new RangeError('The pitch is too coarse for the diameter: no core is left.');
  return (Math.PI / 4) * mean ** 2;
}

/**
 * Proof load and minimum tensile load (N) of a bolt of a property class, M1.6 to M39: the stress area, to three
 * figures as the standard gives it, times the stress of the class. Class 8.8 is stronger above 16 mm. The tables
 * of the standard are rounded further. Refuses other classes and diameters. Source: ISO 898-1:2013 tables 3 to 7.
 */
export function strength(bolt: Thread & { propertyClass: PropertyClass }): {
  proofLoad: number;
  minimumTensileLoad: number;
} {
  const { diameter, propertyClass } = bolt;
  const area = Number(stressArea(bolt).toPrecision(3));
  if (!Object.hasOwn(STRESSES, propertyClass)) {
    throw new RangeError(`"${propertyClass}" is not a property class that is known here.`);
  }
  const stress = STRESSES[propertyClass].find(({ upTo }) => diameter <= upTo);
  if (stress === undefined || diameter < SMALLEST_DIAMETER) {
    throw new RangeError('The strength of bolts is known from M1.6 to M39.');
  }
  return { proofLoad: area * stress.proof, minimumTensileLoad: area * stress.tensile };
}

/**
 * Preload (N) that a torque (N·m) is likely to give at a nut factor and a nominal diameter (mm): T / (K·d). An
 * estimate, see `estimatePreload`. Source: Shigley, 9th ed., equation 8-27.
 */
export function preloadFromTorque(bolt: { torque: number; nutFactor: number; diameter: number }): number {
  requireNotNegative(bolt.torque, 'torque');
  requirePositive(bolt.nutFactor, 'nut factor');
  requirePositive(bolt.diameter, 'diameter');
  return (bolt.torque * 1000) / (bolt.nutFactor * bolt.diameter);
}

/**
 * Estimate, never a limit: the preload (N) that a torque (N·m) gives over a range of nut factors. The highest
 * factor gives the lowest preload. `nutFactorRange` has the range to use where only the likely factor is known.
 */
export function estimatePreload(bolt: {
  torque: number;
  nutFactors: NutFactorRange;
  diameter: number;
}): PreloadEstimate {
  const { torque, nutFactors, diameter } = bolt;
  if (!(nutFactors.low <= nutFactors.likely && nutFactors.likely <= nutFactors.high)) {
    throw new RangeError('The likely nut factor must lie between the low and the high one.');
  }
  const preload = (nutFactor: number): number => preloadFromTorque({ torque, nutFactor, diameter });
  return {
    low: preload(nutFactors.high),
    likely: preload(nutFactors.likely),
    high: preload(nutFactors.low),
  };
}

/**
 * The nut factors between which the preload of a bolt that is tightened by torque strays by 25 % either way of
 * the likely one. Source: bolted-joint practice as a university teaches it.
 */
export function nutFactorRange(likely: number): NutFactorRange {
  requirePositive(likely, 'nut factor');
  return { low: likely / (1 + TORQUE_SCATTER), likely, high: likely / (1 - TORQUE_SCATTER) };
}

/**
 * Torque (N·m) for a preload (N), long form: the climb of the thread, the friction of its flanks, and the
 * friction under the head at its effective diameter (mm). Frictions are coefficients, zero or more; a friction
 * that no torque overcomes is refused. An estimate. Source: Shigley, 9th ed., equation 8-26, metric flanks.
 */
export function torqueFromPreload(
  bolt: Thread & { preload: number; threadFriction: number; headFriction: number; headDiameter: number },
): number {
  const { preload, pitch, threadFriction, headFriction, headDiameter } = bolt;
  requireNotNegative(preload, 'preload');
  requireNotNegative(threadFriction, 'friction of the thread');
  requireNotNegative(headFriction, 'friction under the head');
  requirePositive(headDiameter, 'friction diameter under the head');
  const effective = pitchDiameter(bolt);
  const climb = pitch / (Math.PI * effective);
  const flank = threadFriction * FLANK_SECANT;
  if (flank * climb >= 1) throw new RangeError('With this friction no torque turns the thread.');
  const thread = (effective * (climb + flank)) / (1 - flank * climb);
  return (preload * (thread + headDiameter * headFriction)) / 2 / 1000;
}

/**
 * How far (mm) a bolt advances when it is turned by an angle (degrees, zero or more): stretch of the bolt and
 * squeeze of the joint together. Source: geometry of the helix.
 */
export function travelFromAngle(turn: { angle: number; pitch: number }): number {
  requireNotNegative(turn.angle, 'angle');
  requirePositive(turn.pitch, 'pitch');
  return (turn.pitch * turn.angle) / 360;
}

/**
 * Stiffness (N/mm) of a bolt whose shank and free thread (mm², mm) stretch one after the other; modulus in
 * N/mm². One of the two lengths may be zero. Source: Shigley, 9th ed., table 8-7.
 */
export function boltStiffness(bolt: {
  shankArea: number;
  shankLength: number;
  threadArea: number;
  threadLength: number;
  modulus: number;
}): number {
  const { shankArea, shankLength, threadArea, threadLength, modulus } = bolt;
  requirePositive(shankArea, 'area of the shank');
  requirePositive(threadArea, 'area of the thread');
  requireNotNegative(shankLength, 'length of the shank');
  requireNotNegative(threadLength, 'length of the thread');
  requirePositive(shankLength + threadLength, 'length that stretches');
  requirePositive(modulus, 'modulus');
  return (shankArea * threadArea * modulus) / (shankArea * threadLength + threadArea * shankLength);
}

/**
 * What to set a torque wrench to (N·m) when an adapter makes it longer or shorter: M·L / (L + E·cos α). Lengths
 * in mm from the hand to the square and from the square to the bolt; the angle in degrees, 0 straight ahead,
 * 90 square across (no correction), 180 folded back. Source: TM 9-254 fig. 4-6.
 */
export function adapterSetting(adapter: {
  target: number;
  wrenchLength: number;
  adapterLength: number;
  adapterAngle: number;
}): number {
  const { target, wrenchLength, adapterLength, adapterAngle } = adapter;
  requirePositive(target, 'torque');
  requirePositive(wrenchLength, 'wrench length');
  requireNotNegative(adapterLength, 'adapter length');
  requireFinite(adapterAngle, 'adapter angle');
  const reach = wrenchLength + adapterLength * Math.cos((adapterAngle * Math.PI) / 180);
  if (reach <= 0)
    throw new RangeError('The adapter reaches back past the hand: no setting gives this torque.');
  return (target * wrenchLength) / reach;
}

/** Pitch diameter (mm) by ISO 724. */
function pitchDiameter({ diameter, pitch }: Thread): number {
  requirePositive(diameter, 'diameter');
  requirePositive(pitch, 'pitch');
  return diameter - 0.649519 * pitch;
}
