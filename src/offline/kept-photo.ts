import type { Surroundings } from './surroundings';

/** An address under which a picture that is on this tablet can be shown; revoke it after use. */
export async function photoUrl({ db }: Surroundings, hash: string): Promise<string | undefined> {
  const [photo, kept] = await Promise.all([db.photos.get(hash), db.photoBytes.get(hash)]);
  return photo && kept && URL.createObjectURL(new Blob([kept.bytes], { type: photo.type }));
}
