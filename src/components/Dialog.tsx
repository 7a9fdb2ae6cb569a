import { useId, useLayoutEffect, useRef, type MouseEvent, type ReactNode } from 'react';

export interface DialogProps {
  title: string;
  isOpen: boolean;
  /** Called on Escape, on the close button and, for a sheet, on a touch beside it. */
  onClose: () => void;
  children: ReactNode;
  /** Buttons at the foot, always in sight on a sheet. */
  actions?: ReactNode;
  /** `sheet` rises over the lower part of the screen or stands at the side; `dialog` stands in the middle. */
  shape?: 'dialog' | 'sheet' | undefined;
  /** Words of the close button; `null` where one of the actions closes. */
  closeLabel?: string | null | undefined;
}

/** Asks or shows one thing over the page; the browser's own dialog keeps the focus inside. */
export function Dialog({
  title,
  isOpen,
  onClose,
  children,
  actions,
  shape = 'dialog',
  closeLabel = 'Close',
}: DialogProps) {
  const ref = useRef<HTMLDialogElement>(null);
  const titleId = useId();

  // Before the effects of what is inside, which may scroll to something that has to be seen.
  useLayoutEffect(() => {
    const dialog = ref.current;
    if (dialog === null) return;
    if (isOpen && !dialog.open) dialog.showModal();
    if (!isOpen && dialog.open) dialog.close();
  }, [isOpen]);

  function closeBeside(event: MouseEvent<HTMLDialogElement>) {
    if (shape === 'sheet' && event.target === ref.current) onClose();
  }

  return (
    // The keyboard closes a dialog with Escape, which arrives as `cancel`; the click is only the touch beside a sheet.
    // eslint-disable-next-line jsx-a11y/click-events-have-key-events, jsx-a11y/no-noninteractive-element-interactions
    <dialog
      ref={ref}
      className="dialog"
      data-shape={shape}
      aria-labelledby={titleId}
      onCancel={(event) => {
        event.preventDefault();
        onClose();
      }}
      onClick={closeBeside}
    >
      {isOpen && (
        <div className="dialog-inside">
          <div className="dialog-head">
            <h2 id={titleId}>{title}</h2>
            {closeLabel !== null && (
              <button type="button" className="quiet-button" data-shape="wide" onClick={onClose}>
                {closeLabel}
              </button>
            )}
          </div>
          <div className="dialog-body">{children}</div>
          {actions !== undefined && <div className="dialog-actions">{actions}</div>}
        </div>
      )}
    </dialog>
  );
}
