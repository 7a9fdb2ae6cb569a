import { useState } from 'react';
import { Button } from '@/components/Button';
import { Checkbox } from '@/components/Checkbox';
import { Dialog } from '@/components/Dialog';
import { ROLE_CHOICES } from './roles';

export interface RolesDialogProps {
  name: string;
  roles: string[];
  onKeep: (roles: string[]) => void;
  onClose: () => void;
}

/** Changes what a person may do from now on; what they did stays as it was. */
export function RolesDialog({ name, roles, onKeep, onClose }: RolesDialogProps) {
  const [chosen, setChosen] = useState(roles);
  const keep = (
    <Button look="main" onClick={() => onKeep(chosen)} disabled={chosen.length === 0}>
      Keep
    </Button>
  );
  return (
    <Dialog title={`Roles of ${name}`} isOpen onClose={onClose} actions={keep} closeLabel="Leave as it was">
      <div className="form">
        {ROLE_CHOICES.map(({ role, does }) => (
          <Checkbox
            key={role}
            label={role}
            hint={does}
            checked={chosen.includes(role)}
            onChange={(event) =>
              setChosen(event.target.checked ? [...chosen, role] : chosen.filter((other) => other !== role))
            }
          />
        ))}
      </div>
    </Dialog>
  );
}
