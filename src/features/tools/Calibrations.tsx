import { DeviationStrip } from '@/components/DeviationStrip';
import { Verdict, type VerdictKind } from '@/components/Verdict';
import { judgeCalibration, missingForJudgement, type CalibrationVerdict } from '@/domain/calibration';
import { dayWords } from '@/domain/time-words';
import type { CalibrationAnswer, ToolWithCalibrations } from './tool-answer';

const VERDICTS: Record<CalibrationVerdict, { kind: VerdictKind; word: string }> = {
  passed: { kind: 'inside', word: 'Passed' },
  failed: { kind: 'outside', word: 'Failed' },
  'not judged': { kind: 'none', word: 'Not judged' },
};

/** The calibrations of a tool, the newest first, each with its readings. */
export function Calibrations({ tool }: { tool: ToolWithCalibrations }) {
  return (
    <section className="part" aria-labelledby="calibrations">
      <h2 className="part-title" id="calibrations">
        Calibrations
      </h2>
      {tool.calibrations.length === 0 && <p>None is entered yet.</p>}
      {tool.calibrations.map((calibration) => (
        <Calibration key={calibration.id} tool={tool} calibration={calibration} />
      ))}
    </section>
  );
}

function Calibration({ tool, calibration }: { tool: ToolWithCalibrations; calibration: CalibrationAnswer }) {
  const { verdict, reasons } = calibration;
  return (
    <article className="calibration">
      <div className="calibration-head">
        <h3>{dayWords(calibration.on)}</h3>
        <Verdict kind={VERDICTS[verdict].kind} word={VERDICTS[verdict].word} size="small" />
      </div>
      <p className="cell-note">
        Certificate <span className="figure">{calibration.certificate}</span>
        {verdict === 'failed' ? '' : `, counts until ${dayWords(calibration.dueOn)}`}
      </p>
      {reasons.length > 0 && (
        <ul className="calibration-reasons">
          {reasons.map((reason) => (
            <li key={reason}>{reason}</li>
          ))}
        </ul>
      )}
      <Readings tool={tool} calibration={calibration} />
    </article>
  );
}

/** Drawn where there is a limit to draw them against; else in figures. */
function Readings({ tool, calibration }: { tool: ToolWithCalibrations; calibration: CalibrationAnswer }) {
  const { readings, verdict } = calibration;
  const isDrawn = verdict !== 'not judged' && missingForJudgement(tool).length === 0;
  const { limitPercent, points } = isDrawn
    ? judgeCalibration(tool, readings)
    : { limitPercent: null, points: [] };
  if (limitPercent !== null && points.length > 0) {
    return (
      <DeviationStrip
        label={`Readings between ± ${limitPercent} %: ${points.map(({ set, isPassed }) => `${set} ${tool.unit ?? ''} ${isPassed ? 'within' : 'not passed'}`).join(', ')}`}
        limitPercent={limitPercent}
        points={points.map((point) => ({
          label: `${point.set} ${tool.unit ?? ''}`,
          deviations: point.readings.map(({ deviationPercent, isWithin }) => ({
            percent: Number(deviationPercent),
            isWithin,
          })),
        }))}
      />
    );
  }
  return (
    <ul className="figure">
      {readings.map(({ set, reference, unit }, i) => (
        <li key={i}>
          {set} {unit}, reference {reference} {unit}
        </li>
      ))}
    </ul>
  );
}
