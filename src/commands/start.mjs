/*
 * npm start: from a fresh clone to a served program, with nothing installed but Node.
 *
 * It installs what the lock file names, builds when a source file has changed since the last build, and
 * then runs the built server in this same process. The server is built together with the pages
 * (entry-points.mjs), so a plain Node runs it: dist/server/serve.mjs opens the data folder, brings its
 * tables up to date, loads the demo into an empty one, and listens.
 */
import { buildIfStale } from './build.mjs';
import { explain, requireNode } from './console.mjs';
import { installIfStale } from './install.mjs';
import { runServer } from './serve.mjs';

try {
  requireNode();
  await installIfStale();
  await buildIfStale();
  await runServer();
} catch (error) {
  explain(error);
  process.exitCode = 1;
}
