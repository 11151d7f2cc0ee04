import { signal } from '@preact/signals';
import { all, type Study } from './api.ts';

/** What all pages share: where we are, and which study is open. */
export const route = signal(location.pathname);
export const studies = signal<readonly Study[] | null>(null);
export const studyId = signal<string | null>(localStorage.getItem('sidelong-study'));

export function go(path: string): void {
  history.pushState(null, '', path);
  route.value = path;
  window.scrollTo(0, 0);
}

window.addEventListener('popstate', () => {
  route.value = location.pathname;
});

export async function loadStudies(): Promise<void> {
  const items = await all<Study>('/api/studies');
  studies.value = items;
  if (!items.some((study) => study.id === studyId.value)) choose(items[0]?.id ?? null);
}

export function choose(id: string | null): void {
  studyId.value = id;
  if (id !== null) localStorage.setItem('sidelong-study', id);
}
