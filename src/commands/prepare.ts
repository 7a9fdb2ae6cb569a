import { seedDemo } from '@db/seed';
import { type App, openApp, provideApp } from '@/server/compose';
import { type Settings } from '@/server/settings';

/** Opens the one app of this process, and fills an empty data folder with the demo where the settings allow it. */
export async function prepareApp(settings: Settings): Promise<App> {
  const app = await openApp(settings);
  provideApp(app);
  if (settings.demo && (await seedDemo(app))) {
    console.log('Loaded the demo workshop into an empty data folder.');
  }
  return app;
}
