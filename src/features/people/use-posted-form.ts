import { useState } from 'react';
import { type DefaultValues, type FieldValues, type Path, useForm } from 'react-hook-form';
import * as z from 'zod/mini';
import { postForm } from './post-form';

/** The answer of a form that has nothing more to say. */
export const done = z.object({ ok: z.literal(true) });

/**
 * The one way that a form of a desktop page is sent: its own checks first, then the server's, whose word about
 * a field stands at that field and about anything else above the form.
 */
export function usePostedForm<F extends FieldValues, S extends z.ZodMiniType>({
  path,
  answer,
  defaults,
  toBody,
  onDone,
}: {
  path: string;
  answer: S;
  defaults: DefaultValues<F>;
  /** What is sent for what was typed. */
  toBody: (fields: F) => unknown;
  onDone: (answer: z.output<S>) => Promise<void> | void;
}) {
  const form = useForm<F>({ defaultValues: defaults });
  const [trouble, setTrouble] = useState<string>();
  const send = form.handleSubmit(async (fields) => {
    setTrouble(undefined);
    const outcome = await postForm(path, toBody(fields), answer);
    if (outcome.ok) return onDone(outcome.answer);
    const { field, message } = outcome;
    if (field !== undefined && field in fields)
      form.setError(field as Path<F>, { message }, { shouldFocus: true });
    else setTrouble(message);
  });
  const { errors, isSubmitting } = form.formState;
  const errorOf = (name: keyof F): string | undefined => {
    const message = errors[name]?.message;
    return typeof message === 'string' ? message : undefined;
  };
  return {
    register: form.register,
    send,
    trouble,
    isSubmitting,
    errorOf,
    getValues: form.getValues,
    reset: () => form.reset(),
  };
}
