import type { CalibrationRow } from '@db/tables';
import {
  type CalibrationJudgement,
  type CalibrationReading,
  type CalibrationVerdict,
  failureWords,
  isMeasured,
  judgeCalibration,
  missingForJudgement,
  TORQUE_TOOL_KIND,
} from '@/domain/calibration';
import type { Tool } from '@/domain/tool';
import { type Actor, requireRole } from './actor';
import type { Clock, Ids } from './clock';
import type { Db, Trx } from './database';
import { AppError } from './errors';
import { readTool } from './tool-rows';
import { readToday } from './workshop';
import { appendWorkshopEntry } from './workshop-trail';

export interface Calibration {
  id: string;
  tool: string;
  on: string;
  dueOn: string;
  certificate: string;
  readings: CalibrationReading[];
  by: string;
  /** What the server made of the readings; "not judged" for kinds of tool without a rule. */
  verdict: CalibrationVerdict;
  /** Why it did not pass, in words. */
  reasons: string[];
}

export type NewCalibration = Pick<Calibration, 'on' | 'dueOn' | 'certificate' | 'readings'>;

/** The calibrations of a tool, the newest first; whoever asks was checked before. */
export async function listCalibrations(db: Db, tool: string): Promise<Calibration[]> {
  const rows = await db
    .selectFrom('calibration')
    .selectAll()
    .where('tool_id', '=', tool)
    .orderBy('on', 'desc')
    .orderBy('id', 'desc')
    .execute();
  return rows.map(toCalibration);
}

/**
 * Records a calibration and what the server made of its readings. One that did not fail moves the tool's due date
 * and starts its cycles anew; after one that failed the tool is not fit until another one passes.
 */
export async function recordCalibration(
  trx: Trx,
  actor: Actor,
  toolId: string,
  calibration: NewCalibration,
  making: { clock: Clock; ids: Ids },
): Promise<Calibration> {
  requireRole(actor, 'supervisor', 'quality lead', 'owner');
  const tool = await readTool(trx, toolId);
  await requireDays(trx, calibration, making.clock);
  const { verdict, reasons } = judge(tool, calibration.readings);
  const row: CalibrationRow = {
    id: making.ids.next(),
    tool_id: toolId,
    on: calibration.on,
    due_on: calibration.dueOn,
    certificate: calibration.certificate,
    readings: JSON.stringify(calibration.readings),
    by_person: actor.personId,
    verdict,
    reasons: JSON.stringify(reasons),
  };
  await trx.insertInto('calibration').values(row).execute();
  const [newest] = await listCalibrations(trx, toolId);
  // An old certificate that is entered late neither moves the date back nor forgets the cycles since.
  if (newest?.id === row.id) await takeOver(trx, newest);
  const { on, dueOn, certificate, readings } = calibration;
  await appendWorkshopEntry(
    trx,
    actor,
    {
      kind: 'calibration-recorded',
      data: {
        calibration: row.id,
        tool: toolId,
        serial: tool.serial,
        on,
        dueOn,
        certificate,
        readings: readings.map(({ set, reference, unit }) => ({ set, reference, unit })),
        cyclesUsedBefore: tool.cyclesUsed,
        verdict,
        reasons,
      },
    },
    making,
  );
  return toCalibration(row);
}

/** Why the newest calibration, if it passed, would fail by the tool's facts as they are now; null if it would not. */
export function failureOfNewest(tool: Tool, [newest]: readonly Calibration[]): string | null {
  if (newest?.verdict !== 'passed') return null;
  const missing = missingForJudgement(tool);
  const reasons =
    missing.length > 0 ? [`${missing.join(' and ')} not known`] : judge(tool, newest.readings).reasons;
  return reasons.length === 0 ? null : `by its changed facts ${failureWords(reasons)}`;
}

async function takeOver(trx: Trx, { tool, dueOn, verdict, reasons }: Calibration): Promise<void> {
  const change =
    verdict === 'failed'
      ? { failure: failureWords(reasons) }
      : { due_on: dueOn, cycles_used: 0, failure: null };
  await trx.updateTable('tool').set(change).where('id', '=', tool).execute();
}

function judge(tool: Tool, readings: readonly CalibrationReading[]): CalibrationJudgement {
  const missing = missingForJudgement(tool);
  if (missing.length > 0) {
    throw new AppError(
      'conflict',
      `Nothing was recorded: ${missing.join(' and ')} must be known before its readings can be judged. Change the facts of the tool first.`,
    );
  }
  const nonsense = readings.findIndex(({ set, reference }) => !isMeasured(set) || !isMeasured(reference));
  if (tool.kind === TORQUE_TOOL_KIND && nonsense !== -1) {
    throw new AppError('invalid-field', `Reading ${nonsense + 1} is not a torque that was read.`, {
      field: 'readings',
    });
  }
  return judgeCalibration(tool, readings);
}

async function requireDays(db: Db, { on, dueOn }: NewCalibration, clock: Clock): Promise<void> {
  if (dueOn <= on) {
    throw new AppError('invalid-field', 'The next calibration has to be due after this one was made.', {
      field: 'dueOn',
    });
  }
  if (on > (await readToday(db, clock)))
    throw new AppError('invalid-field', 'A calibration is entered once it was made.', { field: 'on' });
}

function toCalibration(row: CalibrationRow): Calibration {
  return {
    id: row.id,
    tool: row.tool_id,
    on: row.on,
    dueOn: row.due_on,
    certificate: row.certificate,
    readings: JSON.parse(row.readings) as CalibrationReading[],
    by: row.by_person,
    verdict: row.verdict,
    reasons: JSON.parse(row.reasons) as string[],
  };
}
