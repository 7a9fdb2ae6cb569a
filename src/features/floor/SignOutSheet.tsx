import { useEffect, useState } from 'react';
import { Dialog } from '@/components/Dialog';
import { MainAction } from '@/components/MainAction';
import { countUnsentOf } from '@/offline/sign-out';
import { useFloorStore } from './floor-context';
import { leaveTablet, whyNotLeave } from './sign-in';

export interface SignOutSheetProps {
  person: { id: string; name: string };
  isOnline: boolean;
  onClose: () => void;
  /** They are gone from the tablet. */
  onLeft: () => void;
}

/** What the tablet knows of somebody who wants to leave it. */
interface Leaving {
  unsent: number;
  why: string | undefined;
}

/** Signs one person out at this tablet, and says what stays. */
export function SignOutSheet({ person, isOnline, onClose, onLeft }: SignOutSheetProps) {
  const { offline, reload } = useFloorStore().getState();
  const [leaving, setLeaving] = useState<Leaving>();
  const [isBusy, setBusy] = useState(false);
  useEffect(() => {
    let isGone = false;
    void Promise.all([countUnsentOf(offline, person.id), whyNotLeave(offline, person.id)]).then(
      ([unsent, why]) => {
        if (!isGone) setLeaving({ unsent, why });
      },
    );
    return () => {
      isGone = true;
    };
  }, [offline, person.id]);
  async function leave() {
    setBusy(true);
    await leaveTablet(offline, person.id);
    await reload();
    onLeft();
  }
  return (
    <Dialog
      title={`Sign ${person.name} out`}
      isOpen
      onClose={onClose}
      shape="sheet"
      actions={
        <MainAction
          label="Sign out"
          next="the others stay"
          why={!leaving ? 'a moment' : leaving.why === undefined ? undefined : 'a cap is half done'}
          isBusy={isBusy}
          onPress={() => void leave()}
        />
      }
    >
      <div className="grid max-w-[62ch] gap-3 text-lg">
        {leaving?.why !== undefined && <p className="text-xl font-bold">{leaving.why}</p>}
        {leaving && <p>{unsentWords(leaving.unsent, person.name)}</p>}
        <p>
          To work here again {person.name} signs in with e-mail and password, which needs the network. The key
          for signing with the PIN stays on this tablet.
        </p>
        {!isOnline && (
          <p className="font-bold">
            No network now: {person.name} is gone from this tablet at once, and the server is told as soon as
            there is a network.
          </p>
        )}
      </div>
    </Dialog>
  );
}

function unsentWords(unsent: number, name: string): string {
  if (unsent === 0) return `Everything that ${name} recorded here has been sent.`;
  return unsent === 1
    ? `1 record is not sent yet. It is kept here and still goes under ${name}’s name.`
    : `${unsent} records are not sent yet. They are kept here and still go under ${name}’s name.`;
}
