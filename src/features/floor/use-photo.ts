import { useEffect, useRef, useState } from 'react';
import { preparePhoto, roomForPhotos, type PreparedPhoto } from '@/offline/photo';

export interface TakenPhoto {
  prepared: PreparedPhoto;
  url: string;
  from: 'camera here' | 'from file';
}

/** A picture between the shutter and the record: made ready, shown, kept or taken again. */
export function usePhoto() {
  const [taken, setTaken] = useState<TakenPhoto>();
  const [isPreparing, setPreparing] = useState(false);
  const [trouble, setTrouble] = useState<string>();
  const warning = useRoomWarning();
  const shownUrl = useRef<string | undefined>(undefined);

  function show(next: TakenPhoto | undefined): void {
    if (shownUrl.current !== undefined) URL.revokeObjectURL(shownUrl.current);
    shownUrl.current = next?.url;
    setTaken(next);
  }

  async function prepare(file: File, from: TakenPhoto['from']): Promise<void> {
    setPreparing(true);
    setTrouble(undefined);
    try {
      const prepared = await preparePhoto(file);
      const url = URL.createObjectURL(new Blob([prepared.bytes], { type: prepared.type }));
      show({ prepared, url, from });
    } catch (error) {
      show(undefined);
      setTrouble(error instanceof Error ? error.message : 'This picture can’t be read. Take it again.');
    }
    setPreparing(false);
  }

  return { taken, isPreparing, trouble, warning, prepare, clear: () => show(undefined) };
}

/** Low space is told before a photograph is taken. */
function useRoomWarning(): string | undefined {
  const [warning, setWarning] = useState<string>();
  useEffect(() => {
    let isGone = false;
    roomForPhotos().then(
      ({ words }) => {
        if (!isGone) setWarning(words);
      },
      // A browser that can't tell how much room there is has nothing to warn of.
      () => undefined,
    );
    return () => {
      isGone = true;
    };
  }, []);
  return warning;
}
