import { useEffect, useMemo, useState, type ChangeEvent } from 'react';
import { Button } from '@/components/Button';
import { PhotoError, preparePhoto } from '@/offline/photo';
import type { ArrivalPhoto } from './new-job';

export interface ArrivalPhotosProps {
  photos: ArrivalPhoto[];
  onChange: (photos: ArrivalPhoto[]) => void;
}

/** Pictures of the vehicle as it came: damage, the dial, the engine bay. */
export function ArrivalPhotos({ photos, onChange }: ArrivalPhotosProps) {
  const [trouble, setTrouble] = useState<string>();
  const [isBusy, setBusy] = useState(false);
  const take = async (event: ChangeEvent<HTMLInputElement>) => {
    const files = [...(event.target.files ?? [])];
    event.target.value = '';
    setTrouble(undefined);
    setBusy(true);
    const added: ArrivalPhoto[] = [];
    for (const file of files) {
      try {
        added.push({ ...(await preparePhoto(file)), subject: `arrival ${photos.length + added.length + 1}` });
      } catch (error) {
        if (!(error instanceof PhotoError)) throw error;
        setTrouble(`${file.name}: ${error.message}`);
      }
    }
    const known = new Set(photos.map(({ hash }) => hash));
    onChange([...photos, ...added.filter(({ hash }) => !known.has(hash))]);
    setBusy(false);
  };
  return (
    <section className="part job-part">
      <h2 className="part-title">Arrival photographs</h2>
      <p className="text-soft">
        Each side, damage, the dial with the odometer. Place and camera data are stripped here.
      </p>
      <label className="job-file">
        {isBusy ? 'Reading the pictures' : 'Add photographs'}
        <input
          className="unseen"
          type="file"
          accept="image/*"
          multiple
          onChange={(event) => void take(event)}
          disabled={isBusy}
        />
      </label>
      {trouble !== undefined && (
        <p role="alert" className="text-outside">
          {trouble}
        </p>
      )}
      {photos.length > 0 && (
        <ul className="job-photos mt-4">
          {photos.map((photo) => (
            <li key={photo.hash}>
              <Preview photo={photo} />
              <Button look="link" onClick={() => onChange(photos.filter(({ hash }) => hash !== photo.hash))}>
                Leave out {photo.subject}
              </Button>
            </li>
          ))}
        </ul>
      )}
    </section>
  );
}

function Preview({ photo }: { photo: ArrivalPhoto }) {
  const url = useMemo(() => URL.createObjectURL(new Blob([photo.bytes], { type: photo.type })), [photo]);
  useEffect(() => () => URL.revokeObjectURL(url), [url]);
  return <img src={url} alt={photo.subject} width={160} height={120} />;
}
