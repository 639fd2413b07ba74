import { useCallback, useEffect, useRef, useState } from 'react';
import { Button as AriaButton, Menu, MenuItem, MenuTrigger, Popover } from 'react-aria-components';
import { NavLink, Outlet, useNavigate, useSearchParams } from 'react-router-dom';
import { useSession, useSignOut } from '#client/api/session.ts';
import { useLive } from '#client/api/use-live.ts';
import { useAnnounce } from '#client/ui/announcer.tsx';
import { setShortcutsOn, shortcutsOn, useShortcut } from '#client/ui/shortcuts.tsx';
import { type CurrentSite, SiteProvider } from '#client/ui/site.tsx';
import { Wordmark } from '#client/ui/wordmark.tsx';
import { formatDayWithWeekday } from '#domain/time/index';
import { roleWords, TABS } from './tabs.ts';

const SITE_KEY = 'tl.site';

/** The frame of the clinic's pages: mark, site and day, search, person; the index tabs under it. */
export function Frame() {
  const session = useSession();
  const announce = useAnnounce();
  const [search, setSearch] = useSearchParams();
  const wanted = Number(search.get('site') ?? localStorage.getItem(SITE_KEY) ?? 0);
  const site: CurrentSite | undefined =
    session.sites.find((each) => each.siteId === wanted) ?? session.sites[0];
  useLive((hint) => {
    if (hint.message && hint.siteId === site?.siteId) announce(hint.message);
  });
  useEffect(() => {
    if (site) localStorage.setItem(SITE_KEY, String(site.siteId));
  }, [site]);
  if (!session.person || !site) {
    return <p className="p-10">You work at no site yet. Ask the manager to add you to one.</p>;
  }
  const roles = session.person.roles;
  const chooseSite = (siteId: number): void =>
    setSearch((before) => {
      const next = new URLSearchParams(before);
      next.set('site', String(siteId));
      return next;
    });
  return (
    <SiteProvider site={site}>
      <a href="#content" className="sr-only bg-sheet p-3 focus:not-sr-only focus:absolute focus:z-50">
        Skip to the page
      </a>
      <div className="flex min-h-screen flex-col">
        <header className="px-4 pt-3 sm:px-10">
          <div className="flex flex-wrap items-center gap-x-6 gap-y-2">
            <NavLink to="/" aria-label="Tenderlight, today" className="no-underline">
              <Wordmark />
            </NavLink>
            <SiteAndDay site={site} sites={session.sites} choose={chooseSite} />
            <SearchBox />
            <PersonMenu name={session.person.name} words={roleWords(roles)} />
          </div>
          <nav aria-label="Index" className="-mb-px mt-3 flex flex-wrap">
            {TABS.filter((tab) => tab.roles.some((role) => roles.includes(role))).map((tab) => (
              <NavLink
                key={tab.path}
                to={tab.path}
                end={tab.path === '/'}
                className={({ isActive }) =>
                  `flex min-h-10 items-center px-3 text-small font-semibold no-underline sm:px-4 ${isActive ? 'border border-b-0 border-ink bg-sheet text-trypan' : 'border border-transparent border-b-0 text-soft'}`
                }
              >
                {tab.words}
              </NavLink>
            ))}
          </nav>
        </header>
        <div className="flex grow flex-col border-t border-ink">
          <Outlet />
        </div>
      </div>
    </SiteProvider>
  );
}

function SiteAndDay({
  site,
  sites,
  choose,
}: {
  readonly site: CurrentSite;
  readonly sites: readonly CurrentSite[];
  readonly choose: (siteId: number) => void;
}) {
  return (
    <p className="text-small text-soft">
      {sites.length > 1 ? (
        <select
          aria-label="Site"
          value={site.siteId}
          onChange={(event) => choose(Number(event.target.value))}
          className="min-h-8 rounded-sm border border-edge bg-paper px-1 text-ink"
        >
          {sites.map((each) => (
            <option key={each.siteId} value={each.siteId}>
              {each.name}
            </option>
          ))}
        </select>
      ) : (
        <span>{site.name}</span>
      )}
      <span className="ml-3 whitespace-nowrap font-semibold text-ink">
        {formatDayWithWeekday(site.businessDay)}
      </span>
    </p>
  );
}

function SearchBox() {
  const navigate = useNavigate();
  const box = useRef<HTMLInputElement>(null);
  const [words, setWords] = useState('');
  useShortcut(
    '/',
    useCallback(() => box.current?.focus(), []),
  );
  return (
    <search className="ml-auto max-sm:w-full">
      <form
        onSubmit={(event) => {
          event.preventDefault();
          void navigate(`/patients?search=${encodeURIComponent(words.trim())}`);
        }}
      >
        <label className="flex min-h-8 items-center rounded-sm border border-edge bg-sheet px-3">
          <span className="sr-only">Find a patient by name, birthday or e-mail</span>
          <input
            ref={box}
            type="search"
            value={words}
            onChange={(event) => setWords(event.target.value)}
            placeholder="Find a patient"
            className="w-full bg-transparent text-small outline-none sm:w-52"
          />
          <span aria-hidden="true" className="text-small font-semibold text-soft">
            /
          </span>
        </label>
      </form>
    </search>
  );
}

function PersonMenu({ name, words }: { readonly name: string; readonly words: string }) {
  const signOut = useSignOut();
  const navigate = useNavigate();
  const act = (key: string): void => {
    if (key === 'out') signOut.mutate(undefined, { onSettled: () => void navigate('/sign-in') });
    else if (key === 'keys') {
      setShortcutsOn(!shortcutsOn());
    } else chooseScheme(key);
  };
  return (
    <MenuTrigger>
      <AriaButton className="min-h-8 text-small text-soft">
        {name}, {words} <span aria-hidden="true">▾</span>
      </AriaButton>
      <Popover placement="bottom end" className="z-30 border-2 border-ink bg-sheet py-1">
        <Menu onAction={(key) => act(String(key))} className="outline-none">
          {[
            { key: 'system', label: 'Light or dark by the system' },
            { key: 'light', label: 'Light' },
            { key: 'dark', label: 'Dark' },
            { key: 'keys', label: shortcutsOn() ? 'Switch single keys off' : 'Switch single keys on' },
            { key: 'out', label: 'Sign out' },
          ].map((item) => (
            <MenuItem
              key={item.key}
              id={item.key}
              className="min-h-9 cursor-pointer px-4 py-1.5 outline-none data-focused:bg-fluorescein data-focused:text-on-fluorescein"
            >
              {item.label}
            </MenuItem>
          ))}
        </Menu>
      </Popover>
    </MenuTrigger>
  );
}

/** Keeps the person's choice of scheme; the system decides where nothing is chosen. */
function chooseScheme(scheme: string): void {
  if (scheme === 'light' || scheme === 'dark') {
    localStorage.setItem('tl.scheme', scheme);
    document.documentElement.dataset.scheme = scheme;
  } else {
    localStorage.removeItem('tl.scheme');
    delete document.documentElement.dataset.scheme;
  }
}
