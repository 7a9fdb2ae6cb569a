import { useForm, useWatch } from 'react-hook-form';
import { Button } from '@/components/Button';
import { DateField } from '@/components/DateField';
import { ErrorNote } from '@/components/ErrorNote';
import { Notice } from '@/components/Notice';
import { TextField } from '@/components/TextField';
import { Verdict } from '@/components/Verdict';
import { type CalibrationJudgement, missingForJudgement } from '@/domain/calibration';
import { dayAfter } from '@/domain/tool-standing';
import { ReadingsGrid } from './ReadingsGrid';
import { useToolChange } from './send-tool';
import type { ToolWithCalibrations } from './tool-answer';
import { type CalibrationFields, emptyPoints, judgeTyped, readGrid } from './typed-readings';

const YEAR_DAYS = 365;

/** Enters a calibration from its certificate, judged while it is typed as the server will judge it. */
export function CalibrationForm({ tool, today }: { tool: ToolWithCalibrations; today: string }) {
  const missing = missingForJudgement(tool);
  return (
    <section className="part" aria-labelledby="enter">
      <h2 className="part-title" id="enter">
        Enter a calibration
      </h2>
      {missing.length > 0 ? (
        <Notice title="Its readings can’t be judged yet">
          <p>
            Say under “Change its facts” first: {missing.join(' and ')}. They stand on its plate or its
            certificate.
          </p>
        </Notice>
      ) : (
        <Fields tool={tool} today={today} />
      )}
    </section>
  );
}

function Fields({ tool, today }: { tool: ToolWithCalibrations; today: string }) {
  const form = useForm<CalibrationFields>({
    defaultValues: {
      ...{ on: today, dueOn: dayAfter(today, YEAR_DAYS), certificate: '', points: emptyPoints(tool) },
    },
  });
  const { register, control, formState, handleSubmit } = form;
  const { send, trouble } = useToolChange();
  const points = useWatch({ control, name: 'points' });
  const { readings, wrong } = readGrid(tool, points);
  const judged = judgeTyped(tool, readings);
  const record = handleSubmit(async ({ on, dueOn, certificate }) => {
    if (wrong > 0) return;
    const body = { on, dueOn, certificate: certificate.trim(), readings };
    await send('POST', `/api/tools/${tool.id}/calibrations`, body);
  });
  const { errors, isSubmitting } = formState;
  const hasFailed = judged?.verdict === 'failed';
  return (
    <form className="form" noValidate onSubmit={(event) => void record(event)}>
      {trouble !== undefined && (
        <ErrorNote
          happened={trouble}
          kept="Nothing was recorded; what you typed is still here."
          next="Mend it and try again."
        />
      )}
      <div className="form-pair">
        <DateField
          label="Made on"
          max={today}
          error={errors.on?.message}
          {...register('on', {
            required: 'Say when it was made.',
            validate: (on) => on <= today || 'It is entered once it was made.',
          })}
        />
        <DateField
          label="Counts until"
          error={errors.dueOn?.message}
          {...register('dueOn', {
            required: 'Say until when it counts.',
            validate: (dueOn, { on }) => dueOn > on || 'This has to be after the day it was made on.',
          })}
        />
      </div>
      <TextField
        label="Certificate"
        autoComplete="off"
        isFigure
        error={errors.certificate?.message}
        {...register('certificate', { required: 'Type its number.' })}
      />
      <ReadingsGrid tool={tool} form={form} points={points} judged={judged} />
      <Outcome judged={judged} wrong={wrong} />
      <div className="form-actions">
        <Button look={hasFailed ? 'stop' : 'main'} type="submit" isBusy={isSubmitting}>
          {hasFailed ? 'Record that it did not pass' : 'Record the calibration'}
        </Button>
      </div>
    </form>
  );
}

function Outcome({ judged, wrong }: { judged: CalibrationJudgement | undefined; wrong: number }) {
  return (
    <div aria-live="polite">
      {wrong > 0 && (
        <p className="form-error">
          {wrong === 1 ? 'One cell holds' : `${wrong} cells hold`} something that is no reading. Mend it
          before you record.
        </p>
      )}
      {judged?.verdict === 'passed' && (
        <Verdict kind="inside" word="It passes" size="small">
          Every reading is within ± {judged.limitPercent} %.
        </Verdict>
      )}
      {judged?.verdict === 'failed' && (
        <Verdict kind="outside" word="As it stands it does not pass" size="small">
          <ul>
            {judged.reasons.map((reason) => (
              <li key={reason}>{reason}</li>
            ))}
          </ul>
        </Verdict>
      )}
    </div>
  );
}
