import { render } from 'preact';
import { useEffect, useState } from 'preact/hooks';
import { call, Refusal, setToken } from './api.ts';
import { AboutPage } from './pages/about.tsx';
import { EnvironmentPage } from './pages/environment.tsx';
import { MarginsPage } from './pages/margins.tsx';
import { PartsPage } from './pages/parts.tsx';
import { ReportsPage } from './pages/reports.tsx';
import { ShieldingPage } from './pages/shielding.tsx';
import { TrajectoriesPage } from './pages/trajectories.tsx';
import { CAUTION, Link, ProblemBox } from './parts.tsx';
import { choose, loadStudies, route, studies, studyId } from './state.ts';

const PAGES = [
  ['/trajectories', 'Trajectories', TrajectoriesPage],
  ['/environment', 'Environment', EnvironmentPage],
  ['/shielding', 'Shielding', ShieldingPage],
  ['/parts', 'Parts', PartsPage],
  ['/margins', 'Margins', MarginsPage],
  ['/reports', 'Reports', ReportsPage],
  ['/about', 'Cautions and evidence', AboutPage],
] as const;

function App() {
  const [error, setError] = useState<unknown>(null);
  useEffect(() => {
    // The demo study appears a moment after the first start: look again until there is one.
    let timer: ReturnType<typeof setTimeout>;
    const look = () =>
      loadStudies().then(
        () => {
          setError(null);
          if (studies.value?.length === 0) timer = setTimeout(look, 1500);
        },
        (failure) => setError(failure),
      );
    look();
    return () => clearTimeout(timer);
  }, []);
  const path = route.value === '/' ? '/margins' : route.value;
  const [, , Page] = PAGES.find(([prefix]) => path === prefix || path.startsWith(`${prefix}/`)) ?? PAGES[6];
  const study = studyId.value;
  return (
    <>
      <a class="skip" href="#content">
        To the content
      </a>
      <header>
        <Link to="/margins" class="brand">
          Sidelong
        </Link>
        <nav aria-label="Pages">
          {PAGES.map(([to, label]) => (
            <Link key={to} to={to} class={path.startsWith(to) ? 'here' : ''}>
              {label}
            </Link>
          ))}
        </nav>
        <StudyChoice />
      </header>
      <p class="caution" role="note">
        {CAUTION}
      </p>
      <main id="content">
        {error instanceof Refusal && error.title === 'Token needed' ? <TokenForm /> : <ProblemBox error={error} />}
        {study === null && error === null ? (
          <p role="status">Preparing the first study…</p>
        ) : (
          study !== null && <Page key={study} />
        )}
      </main>
      <footer>
        Doses here carry no margin; design margins are shown separately and are not safety factors. Qualified
        radiation-effects engineers decide. <a href="/api/docs">Calls of the service</a>
      </footer>
    </>
  );
}

function StudyChoice() {
  const [naming, setNaming] = useState(false);
  const make = async (event: SubmitEvent & { currentTarget: HTMLFormElement }) => {
    event.preventDefault();
    const name = String(new FormData(event.currentTarget).get('name') ?? '');
    const study = await call<{ id: string }>('POST', '/api/studies', { name });
    await loadStudies();
    choose(study.id);
    setNaming(false);
  };
  return (
    <div class="study">
      <label>
        Study{' '}
        <select value={studyId.value ?? ''} onChange={(event) => choose(event.currentTarget.value)}>
          {(studies.value ?? []).map((study) => (
            <option key={study.id} value={study.id}>
              {study.name}
            </option>
          ))}
        </select>
      </label>
      {naming ? (
        <form onSubmit={make}>
          <input name="name" required aria-label="Name of the new study" placeholder="Name" />
          <button type="submit">Make</button>
        </form>
      ) : (
        <button type="button" onClick={() => setNaming(true)}>
          New study
        </button>
      )}
    </div>
  );
}

function TokenForm() {
  const enter = (event: SubmitEvent & { currentTarget: HTMLFormElement }) => {
    event.preventDefault();
    setToken(String(new FormData(event.currentTarget).get('token') ?? ''));
    location.reload();
  };
  return (
    <form onSubmit={enter}>
      <label>
        This service asks for its token <input name="token" type="password" required />
      </label>{' '}
      <button type="submit">Enter</button>
    </form>
  );
}

render(<App />, document.getElementById('app')!);
