import * as z from 'zod';
import { CALIBRATION_VERDICTS } from '@/domain/calibration';
import { TORQUE_TOOL_CLASSES, TORQUE_TOOL_TYPES } from '@/domain/tool';
import { role } from './fields';

/** What several routes answer; each is the one description of its thing in the API. */

export const certificate = z.strictObject({ number: z.string(), kind: z.string() });

export const personAnswer = z.strictObject({
  id: z.string(),
  name: z.string(),
  roles: z.array(role),
  active: z.boolean(),
  hasPin: z.boolean(),
  hasSigned: z.boolean(),
  hasPassword: z.boolean(),
  createdAt: z.string(),
  deactivatedAt: z.string().nullable(),
  /** By what they sign, and the last day on which it counts. */
  certificate: certificate.nullable(),
  authorisedUntil: z.string().nullable(),
  /** Only for the owner and the person. */
  email: z.string().optional(),
});

export const deviceAnswer = z.strictObject({
  id: z.string(),
  name: z.string(),
  state: z.enum(['active', 'lost']),
  enrolledBy: z.string(),
  enrolledAt: z.string(),
  lastHeardAt: z.string().nullable(),
});

export const keyAnswer = z.strictObject({
  id: z.string(),
  person: z.string(),
  device: z.string(),
  publicKey: z.string(),
  enrolledAt: z.string(),
  workshopSeq: z.int(),
  revokedAt: z.string().nullable(),
});

export const toolAnswer = z.strictObject({
  id: z.string(),
  name: z.string(),
  kind: z.string(),
  serial: z.string(),
  rangeLow: z.string().nullable(),
  rangeHigh: z.string().nullable(),
  unit: z.string().nullable(),
  dueOn: z.string().nullable(),
  state: z.enum(['in use', 'withdrawn']),
  cycleLimit: z.int().nullable(),
  cyclesUsed: z.int().nullable(),
  torqueType: z.enum(TORQUE_TOOL_TYPES).nullable(),
  torqueClass: z.enum(TORQUE_TOOL_CLASSES).nullable(),
  /** Why its last calibration failed. */
  failure: z.string().nullable(),
});

export const calibrationAnswer = z.strictObject({
  id: z.string(),
  tool: z.string(),
  on: z.string(),
  dueOn: z.string(),
  certificate: z.string(),
  readings: z.array(z.strictObject({ set: z.string(), reference: z.string(), unit: z.string() })),
  by: z.string(),
  /** What the server made of the readings. */
  verdict: z.enum(CALIBRATION_VERDICTS),
  reasons: z.array(z.string()),
});
