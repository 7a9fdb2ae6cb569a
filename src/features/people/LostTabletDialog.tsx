import { useState } from 'react';
import { Dialog } from '@/components/Dialog';
import { ErrorNote } from '@/components/ErrorNote';
import { HoldButton } from '@/components/HoldButton';
import { TextField } from '@/components/TextField';

interface LostTabletDialogProps {
  name: string;
  /** What tells it from others of the same name. */
  about: string;
  /** Why the last try did not come about. */
  trouble?: string | undefined;
  onDeclare: (reason: string) => void;
  onClose: () => void;
}

/** Declares a tablet lost, with the reason; held down, because every open job of the tablet is told. */
export function LostTabletDialog({ name, about, trouble, onDeclare, onClose }: LostTabletDialogProps) {
  const [reason, setReason] = useState('');
  const given = reason.trim();
  return (
    <Dialog
      title={`Declare ${name} lost`}
      isOpen
      onClose={onClose}
      closeLabel="Leave it as it is"
      actions={
        <HoldButton
          label={`Declare ${name} lost`}
          tone="stop"
          why={given === '' ? 'say how it was lost' : undefined}
          onHeld={() => onDeclare(given)}
        />
      }
    >
      <div className="form">
        <p>
          <b>{about}</b>
        </p>
        <p>
          It can&rsquo;t send any more until it is taken back into use. In each open job in which it recorded,
          a deviation of class A says from which record on nothing came: the first start and the handover wait
          until it is disposed of. Signatures that cover what never came are refused.
        </p>
        <p>What it still holds is taken all the same if it is found, or from a file that it saved.</p>
        <TextField
          label="How was it lost?"
          hint="stands in the workshop’s trail for good; no customer’s name"
          maxLength={500}
          value={reason}
          onChange={(event) => setReason(event.target.value)}
        />
        {trouble !== undefined && (
          <ErrorNote happened={trouble} kept="The tablet is as it was." next="Try it again." />
        )}
      </div>
    </Dialog>
  );
}
