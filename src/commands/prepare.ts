import { seedDemo } from '@db/seed';
import { type App, openApp, provideApp } from '@/server/compose';
import { repeatErasures } from '@/server/erasure';
import { type Settings } from '@/server/settings';

/** Opens the one app of this process, and fills an empty data folder with the demo where the settings allow it. */
export async function prepareApp(settings: Settings): Promise<App> {
  const app = await openApp(settings);
  provideApp(app);
  const repeated = await repeatErasures(app);
  if (repeated > 0) console.log(`Erased again what a restore brought back: ${repeated} jobs.`);
  if (settings.demo && (await seedDemo(app))) {
    console.log('Loaded the demo workshop into an empty data folder.');
  }
  return app;
}
