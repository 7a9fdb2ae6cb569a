import { QueryClientProvider } from '@tanstack/react-query';
import { useState } from 'react';
import { Button } from '@/components/Button';
import { ErrorNote } from '@/components/ErrorNote';
import { Field } from '@/components/Field';
import { dayIn, dayWords } from '@/domain/time-words';
import { standingOf } from '@/domain/tool-standing';
import { newQueryClient, useServer } from '@/offline/use-server';
import { CalibrationForm } from './CalibrationForm';
import { Calibrations } from './Calibrations';
import { Standing } from './Standing';
import { useToolChange } from './send-tool';
import { toolAnswer, type ToolWithCalibrations } from './tool-answer';
import { ChangeToolDialog } from './ToolDialogs';
import { classWords, rangeWords } from './tool-facts';
import { ToolUses } from './ToolUses';

export interface ToolPageProps {
  tool: string;
  zone: string;
  /** May this person change it and enter calibrations? */
  canChange: boolean;
  /** May this person read in which jobs it was used? */
  canReadUse: boolean;
}

/** One tool: its facts, its calibrations with their readings, and what was done with it since. */
export function ToolPage(props: ToolPageProps) {
  const [client] = useState(newQueryClient);
  return (
    <QueryClientProvider client={client}>
      <OneTool {...props} />
    </QueryClientProvider>
  );
}

function OneTool({ tool: id, zone, canChange, canReadUse }: ToolPageProps) {
  const { data: tool, error } = useServer(`/api/tools/${id}`, toolAnswer);
  const today = dayIn(zone, new Date().toISOString());
  return (
    <>
      {error && (
        <ErrorNote
          happened={error.message}
          kept="The tool is as it was."
          next="It is asked for again by itself."
        />
      )}
      {tool === undefined ? (
        <p role="status">Reading the tool</p>
      ) : (
        <>
          <ToolHead tool={tool} today={today} canChange={canChange} />
          <div className="desk-columns mt-8">
            <Calibrations tool={tool} />
            <div>
              {canChange && tool.state === 'in use' && (
                <CalibrationForm key={factsKey(tool)} tool={tool} today={today} />
              )}
              {canReadUse && <ToolUses tool={tool} />}
            </div>
          </div>
        </>
      )}
    </>
  );
}

/** The form begins anew where the facts that it judges by change, and once a calibration was taken. */
function factsKey(tool: ToolWithCalibrations): string {
  const { kind, rangeLow, rangeHigh, unit, torqueType, torqueClass, calibrations } = tool;
  return [kind, rangeLow, rangeHigh, unit, torqueType, torqueClass, calibrations.length].join(' ');
}

function ToolHead({
  tool,
  today,
  canChange,
}: {
  tool: ToolWithCalibrations;
  today: string;
  canChange: boolean;
}) {
  const [isChanging, setIsChanging] = useState(false);
  const { send, trouble } = useToolChange();
  const isInUse = tool.state === 'in use';
  const turn = () => void send('PATCH', `/api/tools/${tool.id}`, { state: isInUse ? 'withdrawn' : 'in use' });
  return (
    <>
      <div className="page-head">
        <div className="tool-head">
          <h1 className="page-title">{tool.name}</h1>
          <Standing standing={standingOf(tool, today)} />
        </div>
        {canChange && (
          <div className="form-actions">
            <Button look="quiet" onClick={() => setIsChanging(true)}>
              Change its facts
            </Button>
            <Button look="quiet" onClick={turn}>
              {isInUse ? 'Withdraw it from use' : 'Take it back into use'}
            </Button>
          </div>
        )}
      </div>
      {trouble !== undefined && (
        <ErrorNote happened={trouble} kept="The tool is as it was." next="Try it again." />
      )}
      <dl className="fields">
        <Field label="Kind">{tool.kind}</Field>
        <Field label="Serial number" isFigure>
          {tool.serial}
        </Field>
        <Field label="Range" isFigure>
          {rangeWords(tool) || 'not known'}
        </Field>
        {tool.kind === 'torque wrench' && (
          <Field label="By ISO 6789">{classWords(tool) || 'type and class not known'}</Field>
        )}
        <Field label="Calibration counts until">
          {tool.dueOn === null ? 'no date' : dayWords(tool.dueOn)}
        </Field>
        {tool.cycleLimit !== null && (
          <Field label="Cycles since then" isFigure>
            {tool.cyclesUsed ?? 0} of {tool.cycleLimit}
          </Field>
        )}
      </dl>
      {isChanging && <ChangeToolDialog tool={tool} onClose={() => setIsChanging(false)} />}
    </>
  );
}
