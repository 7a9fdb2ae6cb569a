import { offlineOfThisPage } from './offline';
import { enrolAuthorKey, enrolTablet, readTablet, refreshSignedIn, whoIsWorking, setWorking } from './tablet';
import type { Outcome } from './server-call';

/**
 * Makes this browser ready for the person who has just signed in: known to the workshop as a tablet, with
 * their own key on it, so that they can record and sign with no network later.
 */
export async function prepareTablet(person: { id: string; name: string }): Promise<Outcome> {
  const offline = offlineOfThisPage();
  const listed = await refreshSignedIn(offline);
  if (!listed.ok) return listed;
  if (!(await readTablet(offline)).enrolled) {
    // A name to begin with; the owner and supervisors rename tablets.
    const enrolled = await enrolTablet(offline, `New tablet (${person.name})`.slice(0, 60));
    if (!enrolled.ok) return enrolled;
  }
  const keyed = await enrolAuthorKey(offline, person.id);
  if (keyed.ok && (await whoIsWorking(offline)) === null) await setWorking(offline, person.id);
  return keyed;
}
