// A standing as its shape, its word and what the chance adds. Inside is quiet on purpose.
import type { Standing } from '../contract_outlook.ts';
import { standingChance } from '../outlook_words.ts';
import { Shape } from '../pictures/mark_shape.tsx';

export function StandingMark({ standing, chance }: { standing: Standing; chance: number }) {
  const comma = standing === 'inside' && chance >= 0.8 ? ', ' : ' ';
  return <p class={`standing ${standing}`} data-testid="standing" data-standing={standing}><Shape name={standing} /><span><b>{standing}</b>{comma}<span>{standingChance(standing, chance)}</span></span></p>;
}
