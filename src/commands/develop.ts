import { readSettings } from '@/server/settings';
import { greeting } from './greeting';
import { prepareApp } from './prepare';

/** Makes the data folder ready for the development server, and says how to get in. */
export async function prepareDevelopment(env: NodeJS.ProcessEnv, root: string): Promise<string> {
  return greeting(await prepareApp(readSettings(env, root)));
}
