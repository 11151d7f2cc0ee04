import type { ComponentChildren } from 'preact';
import { useEffect, useState } from 'preact/hooks';
import type { Verdict } from '../server/margin/result.ts';
import { Refusal } from './api.ts';
import { go } from './state.ts';

/** Pieces that every page is made of. */
export function Link({ to, children, class: className }: { to: string; children: ComponentChildren; class?: string }) {
  return (
    <a
      href={to}
      class={className}
      onClick={(event) => {
        if (event.metaKey || event.ctrlKey || event.shiftKey) return;
        event.preventDefault();
        go(to);
      }}
    >
      {children}
    </a>
  );
}

export function ProblemBox({ error }: { error: unknown }) {
  if (error === null || error === undefined) return null;
  const title = error instanceof Refusal ? error.title : 'Something went wrong';
  const detail = error instanceof Error ? error.message : String(error);
  const places = error instanceof Refusal ? error.places : [];
  return (
    <div class="problem" role="alert">
      <strong>{title}</strong>
      <p>{detail}</p>
      {places.length > 1 && (
        <ul>
          {places.slice(0, 12).map((place) => (
            <li key={`${place.pointer}${place.line}${place.field}${place.detail}`}>
              {place.line !== undefined && <b>line {place.line}: </b>}
              {place.pointer ?? place.field} {place.detail}
              {place.got !== undefined && place.got !== null && ` (got ${String(place.got)})`}
            </li>
          ))}
        </ul>
      )}
    </div>
  );
}

/** Loads once per key and says so while it does. */
export function useLoaded<T>(
  load: () => Promise<T>,
  key: string | null,
): { value: T | null; error: unknown; again: () => void } {
  const [value, setValue] = useState<T | null>(null);
  const [error, setError] = useState<unknown>(null);
  const [count, setCount] = useState(0);
  useEffect(() => {
    if (key === null) return;
    let gone = false;
    load().then(
      (loaded) => {
        if (!gone) {
          setValue(loaded);
          setError(null);
        }
      },
      (failure) => {
        if (!gone) setError(failure);
      },
    );
    return () => {
      gone = true;
    };
  }, [key, count]);
  return { value, error, again: () => setCount((old) => old + 1) };
}

export function Empty({ children }: { children: ComponentChildren }) {
  return <p class="empty">{children}</p>;
}

export function Progress({ share, message, onCancel }: { share: number; message: string; onCancel?: () => void }) {
  return (
    <div class="progress" role="status">
      <progress max={1} value={share} aria-label={message === '' ? 'Progress' : message} />
      <span>
        {Math.round(share * 100)} % {message}
      </span>
      {onCancel !== undefined && (
        <button type="button" onClick={onCancel}>
          Cancel
        </button>
      )}
    </div>
  );
}

const VERDICTS: Readonly<Record<Verdict, { words: string; shape: string; tone: string }>> = {
  meets: { words: 'meets', shape: '●', tone: 'good' },
  needsSectorAnalysis: { words: 'needs sector analysis', shape: '◐', tone: 'warn' },
  doesNotComply: { words: 'does not comply', shape: '✕', tone: 'bad' },
  notDemonstrated: { words: 'not demonstrated', shape: '△', tone: 'warn' },
  notAssessed: { words: 'not assessed', shape: '○', tone: 'muted' },
};

/** A verdict in word and shape as well as colour. */
export function VerdictTag({ verdict }: { verdict: Verdict }) {
  const { words, shape, tone } = VERDICTS[verdict];
  return (
    <span class={`verdict ${tone}`}>
      <span aria-hidden="true">{shape}</span> {words}
    </span>
  );
}

export const CAUTION =
  'Preliminary planning aid. The project’s environment specification and agency standards take precedence; no standard defines these belts, which rest on one flyby each.';
