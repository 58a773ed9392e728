// Plant, pages, clock, the demo marker and this screen's preferences.
import type { ComponentChildren } from 'preact';
import { daemonNowMs, live, pulse } from '../live.ts';
import { Shape } from '../pictures/mark_shape.tsx';
import { type Prefs, type Theme, prefer, prefs } from '../prefs.ts';
import { type Route, alertsLink, floorLink, libraryLink, loadsLink, startLink } from '../routes.ts';
import { useStore } from '../store.ts';
import { clockText, dayText } from '../words.ts';
import { AlertBadge } from './watch.tsx';

export function Header({ on }: { on: Route }) {
  const feed = useStore(live);
  useStore(pulse);
  const floor = feed.floor;
  const nowMs = daemonNowMs(feed);
  const invented = floor && (floor.demo || floor.clock_speed !== 1);
  return <header class="head">
    <div class="head-row">
      <p class="plant"><span class="brand">hearthfront</span><span class="plant-name">{floor?.plant ?? ''}</span></p>
      {invented && <p class="demo" data-testid="demo"><Shape name="demo" />{demoText(floor.demo, floor.clock_speed)}</p>}
      <nav aria-label="Pages">
        <PageLink to={floorLink} here={on.page === 'floor' || on.page === 'furnace' || on.page === 'files'}>Floor</PageLink>
        <PageLink to={loadsLink} here={on.page === 'loads' || on.page === 'load' || on.page === 'correct'}>Loads</PageLink>
        <PageLink to={alertsLink()} here={on.page === 'alerts'}>Alerts<AlertBadge /></PageLink>
        <PageLink to={libraryLink('parts')} here={on.page === 'library'}>Library</PageLink>
        <PageLink to={startLink()} here={on.page === 'start'}>Start a load</PageLink>
      </nav>
      <Choices />
      {floor && <p class="clock" aria-label="Plant time">
        <span class="clock-day">{dayText(nowMs)}</span>
        <span class="clock-time" data-testid="clock">{feed.link === 'away' ? '––:––' : clockText(nowMs)}</span>
      </p>}
    </div>
  </header>;
}

function demoText(demo: boolean, speed: number): string {
  const words = demo ? ['DEMO', 'invented data'] : [];
  if (speed !== 1) words.push(`clock runs ${speed} ×`);
  return words.join(' · ');
}

function PageLink({ to, here, children }: { to: string; here: boolean; children: ComponentChildren }) {
  return <a class="page-link" href={to} aria-current={here ? 'page' : undefined}>{children}</a>;
}

const nextTheme: Record<Theme, Theme> = { auto: 'light', light: 'dark', dark: 'auto' };

function Choices() {
  const chosen = useStore(prefs);
  const flip = (change: Partial<Prefs>) => () => prefer(change);
  return <div class="choices" role="group" aria-label="This screen">
    <button type="button" class="choice" data-testid="unit-temperature" onClick={flip({ temperature: chosen.temperature === 'degc' ? 'degf' : 'degc' })}
      aria-label={`Temperatures in ${chosen.temperature === 'degc' ? 'Celsius' : 'Fahrenheit'}. Press to change.`}>
      <Either first="°C" second="°F" isFirst={chosen.temperature === 'degc'} />
    </button>
    <button type="button" class="choice" data-testid="unit-length" onClick={flip({ length: chosen.length === 'mm' ? 'inch' : 'mm' })}
      aria-label={`Depths in ${chosen.length === 'mm' ? 'millimetres' : 'inches'}. Press to change.`}>
      <Either first="mm" second="inch" isFirst={chosen.length === 'mm'} />
    </button>
    <button type="button" class="choice" data-testid="theme" onClick={flip({ theme: nextTheme[chosen.theme] })} aria-label={`Light or dark: ${chosen.theme}. Press to change.`}>
      <ThemeShape theme={chosen.theme} />{chosen.theme}
    </button>
  </div>;
}

function Either({ first, second, isFirst }: { first: string; second: string; isFirst: boolean }) {
  return <><span class={isFirst ? 'chosen' : 'other'}>{first}</span><span class={isFirst ? 'other' : 'chosen'}>{second}</span></>;
}

function ThemeShape({ theme }: { theme: Theme }) {
  const fill = { auto: 'M10 2a8 8 0 0 1 0 16z', light: '', dark: 'M10 2a8 8 0 0 1 0 16a8 8 0 0 1 0-16z' }[theme];
  return <svg class="theme-shape" viewBox="0 0 20 20" aria-hidden="true"><circle cx="10" cy="10" r="8" fill="none" stroke="currentColor" stroke-width="2" /><path d={fill} fill="currentColor" /></svg>;
}
