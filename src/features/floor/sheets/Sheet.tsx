import type { ReactNode } from 'react';
import { Dialog } from '@/components/Dialog';

export interface SheetProps {
  title: string;
  onClose: () => void;
  children: ReactNode;
  actions?: ReactNode;
}

/** Something that opens over the run screen. */
export function Sheet({ title, onClose, children, actions }: SheetProps) {
  return (
    <Dialog title={title} isOpen onClose={onClose} shape="sheet" actions={actions}>
      {children}
    </Dialog>
  );
}
