// Follows the address after # and scrolls to the top of a new page.
import { type Route, routeOf } from './routes.ts';
import { Store } from './store.ts';

export const route = new Store<Route>(routeOf(location.hash));

export function followAddress(): void {
  addEventListener('hashchange', () => {
    route.set(routeOf(location.hash));
    scrollTo(0, 0);
  });
}
