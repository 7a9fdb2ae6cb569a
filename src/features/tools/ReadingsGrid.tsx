import type { UseFormReturn } from 'react-hook-form';
import { Sign } from '@/components/Sign';
import { type CalibrationJudgement, type JudgedPoint, TORQUE_TOOL_KIND } from '@/domain/calibration';
import { compareDecimals } from '@/domain/decimal';
import type { ToolWithCalibrations } from './tool-answer';
import { type CalibrationFields, typedFigure, type TypedPoint } from './typed-readings';

export interface ReadingsGridProps {
  tool: ToolWithCalibrations;
  form: UseFormReturn<CalibrationFields>;
  points: readonly TypedPoint[];
  judged: CalibrationJudgement | undefined;
}

/** The readings of a certificate, a line a set value; each line says at once whether it passes. */
export function ReadingsGrid({ tool, form: { register }, points, judged }: ReadingsGridProps) {
  const unit = tool.unit ?? '';
  const count = Math.max(...points.map(({ references }) => references.length));
  const isWrong = (text: string) => text.trim() !== '' && typedFigure(text, tool) === undefined;
  const isJudged = tool.kind === TORQUE_TOOL_KIND;
  return (
    <table className="readings-grid">
      <caption className="form-label pb-2 text-left">
        Readings{unit === '' ? '' : `, ${unit}`}: what the tool was set to or showed, and the reference
      </caption>
      <thead>
        <tr>
          <th scope="col">tool</th>
          {Array.from({ length: count }, (_, i) => (
            <th key={i} scope="col">
              {count === 1 ? 'reference' : `ref. ${i + 1}`}
            </th>
          ))}
          {isJudged && <th scope="col">worst</th>}
        </tr>
      </thead>
      <tbody>
        {points.map(({ set, references }, i) => (
          <tr key={i}>
            <td>
              <input
                className="form-input figure"
                inputMode="decimal"
                autoComplete="off"
                aria-label={`Point ${i + 1}: the tool`}
                aria-invalid={isWrong(set) || undefined}
                {...register(`points.${i}.set`)}
              />
            </td>
            {references.map((text, n) => (
              <td key={n}>
                <input
                  className="form-input figure"
                  inputMode="decimal"
                  autoComplete="off"
                  aria-label={`Point ${i + 1}: reference ${n + 1}`}
                  aria-invalid={isWrong(text) || undefined}
                  {...register(`points.${i}.references.${n}`)}
                />
              </td>
            ))}
            {isJudged && (
              <td className="figure whitespace-nowrap">
                <Worst point={pointAt(judged, typedFigure(set, tool))} />
              </td>
            )}
          </tr>
        ))}
      </tbody>
    </table>
  );
}

function pointAt(judged: CalibrationJudgement | undefined, set: string | undefined): JudgedPoint | undefined {
  if (set === undefined) return undefined;
  return judged?.points.find((point) => compareDecimals(point.set, set) === 0);
}

function Worst({ point }: { point: JudgedPoint | undefined }) {
  if (point === undefined) return null;
  const percents = point.readings.map(({ deviationPercent }) => Number(deviationPercent));
  const worst = percents.reduce((far, percent) => (Math.abs(percent) > Math.abs(far) ? percent : far), 0);
  const isWithin = point.readings.every((reading) => reading.isWithin);
  return (
    <span className="tool-standing" data-kind={isWithin ? 'fit' : 'not fit'}>
      <Sign name={isWithin ? 'tick' : 'cross'} />
      {`${worst > 0 ? '+' : ''}${worst.toFixed(1).replace('-', '−')} %`}
    </span>
  );
}
