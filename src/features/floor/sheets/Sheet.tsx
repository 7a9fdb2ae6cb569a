import { useState, type ReactNode } from 'react';
import { Dialog } from '@/components/Dialog';
import { useRun } from '../run-context';
import { SheetRefusal } from './SheetRefusal';

export interface SheetProps {
  title: string;
  onClose: () => void;
  children: ReactNode;
  /** The main action, or what else stays in sight at the foot. */
  foot?: ReactNode;
}

/** Something that opens over the run screen; why a touch in it was not recorded stands at its foot. */
export function Sheet({ title, onClose, children, foot }: SheetProps) {
  const { refusal } = useRun();
  // What was refused before it opened was told on the screen under it.
  const [earlier] = useState(refusal);
  const isNew = refusal !== undefined && refusal !== earlier;
  const actions =
    foot === undefined && !isNew ? undefined : (
      <>
        {isNew && <SheetRefusal {...refusal} />}
        {foot}
      </>
    );
  return (
    <Dialog title={title} isOpen onClose={onClose} shape="sheet" actions={actions}>
      {children}
    </Dialog>
  );
}
