// The frame around every page: header, the word on contact with the daemon, the page, the caution.
import { useEffect } from 'preact/hooks';
import { isCurrent, live } from './live.ts';
import { Alerts } from './pages/alerts.tsx';
import { Correct } from './pages/correct.tsx';
import { Files } from './pages/files.tsx';
import { Floor } from './pages/floor.tsx';
import { Furnace } from './pages/furnace.tsx';
import { Library } from './pages/library.tsx';
import { Load } from './pages/load.tsx';
import { Loads } from './pages/loads.tsx';
import { Start } from './pages/start.tsx';
import { route } from './router.ts';
import type { Route } from './routes.ts';
import { Away } from './shell/away.tsx';
import { Foot } from './shell/foot.tsx';
import { Header } from './shell/header.tsx';
import { Watch } from './shell/watch.tsx';
import { useStore } from './store.ts';

const titles: Record<Route['page'], string> = {
  floor: 'Floor', load: 'Load', correct: 'Correct a load', start: 'Start a load', loads: 'Loads', alerts: 'Alerts', furnace: 'Furnace', files: 'Logger files', library: 'Library',
};

function Page({ on }: { on: Route }) {
  if (on.page === 'load') return <Load id={on.id} key={on.id} />;
  if (on.page === 'start') return <Start furnace={on.furnace} key={on.furnace} />;
  if (on.page === 'loads') return <Loads />;
  if (on.page === 'alerts') return <Alerts furnace={on.furnace} key={on.furnace} />;
  if (on.page === 'correct') return <Correct id={on.id} key={on.id} />;
  if (on.page === 'furnace') return <Furnace id={on.id} key={on.id} />;
  if (on.page === 'files') return <Files id={on.id} key={on.id} />;
  if (on.page === 'library') return <Library shelf={on.shelf} entry={on.key} />;
  return <Floor />;
}

export function App() {
  const on = useStore(route);
  const feed = useStore(live);
  const old = feed.floor !== null && !isCurrent(feed);
  useEffect(() => { document.title = `${titles[on.page]} · hearthfront`; }, [on]);
  return <div class={`frame ${old ? 'old' : ''} ${feed.link === 'away' ? 'away' : ''}`}>
    <Header on={on} />
    <Away />
    {on.page !== 'floor' && on.page !== 'alerts' && <Watch quiet />}
    <main id="page"><Page on={on} /></main>
    <Foot />
  </div>;
}
