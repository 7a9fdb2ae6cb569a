import { expect, it } from 'vitest';
import { GET as getWorkshop } from '@/pages/api/workshop/index';
import { PUT as putUnits } from '@/pages/api/workshop/units';
import { ask, openShop } from '../support/tablet';

it('the owner alone chooses the unit beside SI, and the workshop’s trail tells of it once', async () => {
  const shop = await openShop();
  const { owner, supervisor, ann } = shop.people;
  const choose = (as: typeof owner, shown: string) => ask(putUnits, { as, method: 'PUT', body: { shown } });
  const shown = async () =>
    ((await ask(getWorkshop, { as: ann })).body as { secondUnits: string }).secondUnits;
  const told = () =>
    shop.app.db
      .selectFrom('workshop_entry')
      .select('body')
      .where('kind', '=', 'second-units-changed')
      .execute();

  expect(await shown()).toBe('none');
  for (const other of [supervisor, ann])
    expect(await choose(other, 'inch and pound')).toMatchObject({ status: 403 });
  expect(await choose(owner, 'cubits')).toMatchObject({ status: 400 });
  expect(await shown()).toBe('none');

  expect(await choose(owner, 'inch and pound')).toMatchObject({ status: 200 });
  expect(await choose(owner, 'inch and pound')).toMatchObject({ status: 200 });
  expect(await shown()).toBe('inch and pound');
  expect((await told()).map(({ body }) => (JSON.parse(body) as { data: unknown }).data)).toEqual([
    { shown: 'inch and pound' },
  ]);
});
