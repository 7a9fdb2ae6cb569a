import { useForm, useWatch } from 'react-hook-form';
import { ErrorNote } from '@/components/ErrorNote';
import { SelectField } from '@/components/SelectField';
import { TextField } from '@/components/TextField';
import { TORQUE_TOOL_KIND } from '@/domain/calibration';
import { parseTyped } from '@/domain/decimal';
import { CLASSES_OF_TYPE, TORQUE_TOOL_TYPES } from '@/domain/tool';
import { TOOL_KINDS } from '@/domain/tool-standing';
import { UNITS } from '@/domain/units';
import type { ToolAnswer } from './tool-answer';

/** A tool's facts as they are typed. */
export interface ToolFacts {
  name: string;
  kind: string;
  serial: string;
  rangeLow: string;
  rangeHigh: string;
  unit: string;
  torqueType: '' | 'I' | 'II';
  torqueClass: string;
  cycleLimit: string;
}

const EMPTY: ToolFacts = {
  ...{ name: '', kind: TORQUE_TOOL_KIND, serial: '', rangeLow: '', rangeHigh: '', unit: 'N·m' },
  ...{ torqueType: '', torqueClass: '', cycleLimit: '' },
};

const TYPE_WORDS = { I: 'I, shows the torque', II: 'II, is set to a torque' };

/** The form of a tool's facts, filled with those that it has. */
export function useToolFacts(tool?: ToolAnswer) {
  return useForm<ToolFacts>({
    defaultValues:
      tool === undefined
        ? EMPTY
        : {
            ...{ name: tool.name, kind: tool.kind, serial: tool.serial, unit: tool.unit ?? '' },
            ...{ rangeLow: tool.rangeLow ?? '', rangeHigh: tool.rangeHigh ?? '' },
            ...{ torqueType: tool.torqueType ?? '', torqueClass: tool.torqueClass ?? '' },
            cycleLimit: tool.cycleLimit === null ? '' : String(tool.cycleLimit),
          },
  });
}

/** What is sent for the facts that were typed. */
export function factsBody(facts: ToolFacts) {
  const isTorque = facts.kind === TORQUE_TOOL_KIND;
  const orNull = (text: string) => (text.trim() === '' ? null : text.trim());
  const figure = (text: string) => (text.trim() === '' ? null : parseTyped(text));
  return {
    ...{ name: facts.name.trim(), kind: facts.kind, serial: facts.serial.trim(), unit: orNull(facts.unit) },
    ...{ rangeLow: figure(facts.rangeLow), rangeHigh: figure(facts.rangeHigh) },
    torqueType: isTorque ? orNull(facts.torqueType) : null,
    torqueClass: isTorque ? orNull(facts.torqueClass) : null,
    cycleLimit: facts.cycleLimit.trim() === '' ? null : Number(facts.cycleLimit),
  };
}

export interface ToolFieldsProps {
  form: ReturnType<typeof useToolFacts>;
  trouble: string | undefined;
}

/** The fields of a tool's facts; those of torque tools only where it is one. */
export function ToolFields({ form, trouble }: ToolFieldsProps) {
  const { register, control, formState } = form;
  const [kind, torqueType] = useWatch({ control, name: ['kind', 'torqueType'] });
  const errorOf = (name: keyof ToolFacts) => formState.errors[name]?.message;
  const kinds = TOOL_KINDS.some((known) => known === kind) ? TOOL_KINDS : [...TOOL_KINDS, kind];
  return (
    <div className="form">
      {trouble !== undefined && (
        <ErrorNote happened={trouble} kept="What you typed is still here." next="Mend it and try again." />
      )}
      <div className="form-pair">
        <TextField
          label="Name"
          autoComplete="off"
          error={errorOf('name')}
          {...register('name', { required: 'Type its name.' })}
        />
        <TextField
          label="Serial number"
          autoComplete="off"
          isFigure
          error={errorOf('serial')}
          {...register('serial', { required: 'Type what stands on its plate.' })}
        />
        <SelectField
          label="Kind"
          options={kinds.map((value) => ({ value, label: value }))}
          {...register('kind')}
        />
        <SelectField
          label="Marked in"
          emptyLabel="no unit"
          options={UNITS.map((value) => ({ value, label: value }))}
          {...register('unit')}
        />
        <TextField
          label="Lowest marked value"
          isOptional
          isFigure
          inputMode="decimal"
          error={errorOf('rangeLow')}
          {...register('rangeLow', { validate: isFigureOrEmpty })}
        />
        <TextField
          label="Largest value"
          isOptional={kind !== TORQUE_TOOL_KIND}
          isFigure
          inputMode="decimal"
          error={errorOf('rangeHigh')}
          {...register('rangeHigh', { validate: isFigureOrEmpty })}
        />
        {kind === TORQUE_TOOL_KIND && (
          <>
            <SelectField
              label="Type by ISO 6789"
              emptyLabel="not known"
              options={TORQUE_TOOL_TYPES.map((value) => ({ value, label: TYPE_WORDS[value] }))}
              {...register('torqueType')}
            />
            <SelectField
              label="Class"
              emptyLabel="not known"
              hint="Both stand on its certificate; without them no calibration can be judged."
              options={(torqueType === '' ? [] : CLASSES_OF_TYPE[torqueType]).map((value) => ({
                value,
                label: value,
              }))}
              {...register('torqueClass')}
            />
          </>
        )}
        <TextField
          label="Cycles between calibrations"
          isOptional
          isFigure
          inputMode="numeric"
          error={errorOf('cycleLimit')}
          {...register('cycleLimit', {
            pattern: { value: /^\s*([1-9]\d{0,6})?\s*$/, message: 'A whole number, or leave it empty.' },
          })}
        />
      </div>
    </div>
  );
}

function isFigureOrEmpty(text: string): true | string {
  if (text.trim() === '') return true;
  try {
    parseTyped(text);
    return true;
  } catch (error) {
    if (error instanceof RangeError) return 'A figure, such as 12.5.';
    throw error;
  }
}
