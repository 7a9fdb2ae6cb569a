import { Notice } from '@/components/Notice';

/** Why a form was not taken, read out at once. */
export function FormTrouble({ message }: { message: string | undefined }) {
  if (message === undefined) return null;
  return (
    <Notice tone="stop" title="Not done" isAlert>
      <p>{message}</p>
    </Notice>
  );
}
