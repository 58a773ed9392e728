// Starts the page: theme, address, feed, drawing. Everything else hangs below App.
import './styles/base.css';
import './styles/shell.css';
import './styles/floor.css';
import './styles/load.css';
import './styles/form.css';
import './styles/desk.css';
import './styles/outlook.css';
import './styles/alerts.css';
import 'uplot/dist/uPlot.min.css';
import './styles/plot.css';
import { render } from 'preact';
import { App } from './app.tsx';
import { Feed } from './live.ts';
import { watchTheme } from './prefs.ts';
import { followAddress } from './router.ts';
import { watchSound } from './sound.ts';

watchTheme();
followAddress();
new Feed().start();
watchSound();
const place = document.getElementById('app');
if (place) render(<App />, place);
