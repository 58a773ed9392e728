// A form that was refused: the sentence on top, its place in words, and the way to the field.
import type { RefObject } from 'preact';
import { useState } from 'preact/hooks';
import { placeOf, plainDetail, whichOf } from '../draft/complaint.ts';
import { ApiProblem } from '../http.ts';
import { Shape } from '../pictures/mark_shape.tsx';

export interface Refusal { path: string | null; text: string; title: string; where?: string }

export interface RefusalTurn {
  refusal: Refusal | null;
  show: (title: string, text: string, field?: string) => void;
  showError: (error: unknown) => void;
  clear: () => void;
}

// `groups` are places on the form that have no field of their own.
export function useRefusal(form: RefObject<HTMLFormElement | null>, groups: () => string[]): RefusalTurn {
  const [refusal, setRefusal] = useState<Refusal | null>(null);
  const show = (title: string, text: string, field?: string) => {
    const fields = [...form.current?.querySelectorAll<HTMLElement>('[data-path]') ?? []].map((each) => each.dataset.path ?? '');
    const path = placeOf(field, [...fields, ...groups()]);
    const input = path === null ? undefined : form.current?.querySelector<HTMLInputElement>(`[data-path="${CSS.escape(path)}"]`);
    const where = [whichOf(path ?? ''), input?.labels?.[0]?.firstChild?.textContent?.trim() ?? ''].filter(Boolean).join(', ');
    setRefusal({ path, text: plainDetail(text, field), title, where });
    scrollTo({ top: 0 });
  };
  const showError = (error: unknown) => {
    if (error instanceof ApiProblem) show(error.problem.title ?? 'Not accepted', error.message, error.problem.field?.replace(/^load\./, ''));
    else show('Not sent', String(error));
  };
  return { refusal, show, showError, clear: () => setRefusal(null) };
}

export function Refused({ refusal, form }: { refusal: Refusal | null; form: RefObject<HTMLFormElement | null> }) {
  if (!refusal) return null;
  const go = () => {
    const field = refusal.path === null ? null : form.current?.querySelector<HTMLElement>(`[data-path="${CSS.escape(refusal.path)}"]`);
    for (let fold = field?.closest('details'); fold; fold = fold.parentElement?.closest('details')) fold.open = true;
    field?.scrollIntoView({ block: 'center' });
    field?.focus({ preventScroll: true });
  };
  return <section class="refused" role="alert" data-testid="refusal">
    <Shape name="note" /><div><h2>{refusal.title}</h2><p>{refusal.where && <b>{refusal.where}: </b>}{refusal.text} Nothing you entered is lost.</p></div>
    {refusal.path && <button type="button" class="button plain" data-testid="go-to-field" onClick={go}>Go to the field</button>}
  </section>;
}
