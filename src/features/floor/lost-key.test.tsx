import { render, screen } from '@testing-library/react';
import { expect, it } from 'vitest';
import { noteLostKeys } from '@/offline/lost-keys';
import { setWorking } from '@/offline/tablet';
import { OfflineServer } from '../../../tests/support/offline-server';
import { openTablet } from '../../../tests/support/offline-tablet';
import { FloorContext } from './floor-context';
import { createFloorStore } from './floor-store';
import { StartScreen } from './StartScreen';

it('tells on the first screen whose key a restored server has forgotten, and what to do', async () => {
  const { offline } = await openTablet(new OfflineServer(), { people: ['tech', 'mate'] });
  await setWorking(offline, 'tech');
  await noteLostKeys(offline.db, ['mate']);
  const store = createFloorStore(offline);
  offline.sync.subscribe((sync) => store.setState({ sync }));
  offline.sync.start();
  await store.getState().reload();
  render(
    <FloorContext value={store}>
      <StartScreen />
    </FloorContext>,
  );
  expect(await screen.findByText(/M\. Ate has to sign in on this tablet again/)).toBeVisible();
  expect(screen.getByText(/Nothing is lost/)).toBeVisible();
  expect(screen.getByText(/Touch “Add a person” and sign in there/)).toBeVisible();
  expect(screen.getByRole('button', { name: 'M. Ate, sign in again' })).toBeVisible();
  expect(screen.getByRole('button', { name: 'T. Nician' })).toBeVisible();
  offline.sync.stop();
});
