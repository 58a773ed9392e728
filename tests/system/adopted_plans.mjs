// What becomes of adopted plans when their load is corrected or ended at another time than was thought: a load can
// always be read again, and the daemon lives on.
import { Daemon, MINUTE_MS, binary, check, demoDay, expect, finish, iso, waitFor } from './support.mjs';

binary();
const start_ms = Math.floor(Date.now() / MINUTE_MS) * MINUTE_MS - 21 * 60 * MINUTE_MS;
const { loads } = demoDay(start_ms, 20, ['pit-2', 'batch-5']);
const now = Math.floor(Date.now() / MINUTE_MS) * MINUTE_MS;
const minutesAgo = (minutes) => iso(now - minutes * MINUTE_MS);
const entryOf = (furnace) => loads.find((one) => one.body.furnace === furnace).body;
const plan = [{ name: 'hold', duration_min: 300, temperature_degc: 930, carbon_potential_wt_pct: 0.9 }];
const adoption = (revision, segments = plan) => ({ person: 'Test', reason: 'deeper', expected_revision: revision, segments });

const daemon = await Daemon.fresh();
const begin = async (furnace, started) => {
  const { path: _path, ended_at: _ended, ...body } = entryOf(furnace);
  return daemon.must('POST', '/api/v1/loads', { ...body, started_at: minutesAgo(started) });
};
const snapshotOf = (id, what, fits) => waitFor(what, 20000, async () => {
  const shown = await daemon.must('GET', `/api/v1/loads/${id}/snapshot`);
  return fits(shown) && shown;
});

await check('a load that ended before its plan was adopted is ended all the same', async () => {
  const { id } = await begin('pit-2', 90);
  await daemon.must('POST', `/api/v1/loads/${id}/plan`, adoption(1));
  const ended = await daemon.request('POST', `/api/v1/loads/${id}/end`, { person: 'Test', ended_at: minutesAgo(10) });
  expect(ended.status === 200, `${ended.status} ${ended.text}`);
  const again = await daemon.request('GET', `/api/v1/loads/${id}`);
  expect(again.status === 200, `${again.status} ${again.text}`);
  await waitFor('its result', 20000, async () => (await daemon.request('GET', `/api/v1/loads/${id}/result`)).status === 200);
});

await check('a correction that says nothing of plans leaves them, one that says null too', async () => {
  const { id } = await begin('batch-5', 120);
  await daemon.must('POST', `/api/v1/loads/${id}/plan`, adoption(1));
  const { load } = { load: (await daemon.must('GET', `/api/v1/loads/${id}`)) };
  const { path: _path, ...body } = entryOf('batch-5');
  const wanted = { ...body, started_at: minutesAgo(120), plans: null };
  delete wanted.ended_at;
  await daemon.must('PUT', `/api/v1/loads/${id}`, { person: 'Test', reason: 'typing error', expected_revision: 2, load: wanted });
  const shown = await snapshotOf(id, 'the corrected load', (each) => each.load.revision === 3);
  expect(shown.plans.length === 1, JSON.stringify(shown.plans));

  // The load began after its plan was adopted: refused, and still there.
  const late = { ...wanted, started_at: iso(Date.now() + 1000) };
  const refused = await daemon.request('PUT', `/api/v1/loads/${id}`, { person: 'Test', reason: 'later', expected_revision: 3, load: late });
  expect(refused.status === 422 && refused.text.includes('plans[0].from'), `${refused.status} ${refused.text}`);
  const again = await daemon.request('GET', `/api/v1/loads/${id}`);
  expect(again.status === 200, `${again.status} ${again.text}`);
});

await check('a trial whose segment ends by an item that is not there is refused', async () => {
  const id = (await daemon.must('GET', '/api/v1/loads?state=open')).loads[0].id;
  await snapshotOf(id, 'an outlook', (each) => each.outlook);
  const segments = [{ ...plan[0], until: { kind: 'case_depth', item: 'nobody', depth_mm: 0.5 } }];
  const tried = await daemon.request('POST', `/api/v1/loads/${id}/trial`, { segments });
  expect(tried.status === 422 && tried.text.includes('nobody'), `${tried.status} ${tried.text.slice(0, 200)}`);
});

await check('the daemon lives', async () => {
  expect((await daemon.request('GET', '/readyz')).status === 200, 'not ready');
  expect((await daemon.stop()).code === 0, 'did not stop by itself');
});
finish();
