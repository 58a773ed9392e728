// A mark with its shape, word and sentence.
import type { Mark } from '../marks.ts';
import { Shape } from '../pictures/mark_shape.tsx';

export function MarkRow({ mark }: { mark: Mark }) {
  return <p class={`mark ${mark.colour}`} data-mark={mark.shape}>
    <Shape name={mark.shape} />
    <span><b>{mark.word}</b> <span class="mark-sentence">{mark.sentence}</span></span>
  </p>;
}
