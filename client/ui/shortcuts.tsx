import { useEffect } from 'react';

const OFF = 'tl.shortcuts-off';

/** Single keys can be switched off (WCAG 2.1.4). */
export function shortcutsOn(): boolean {
  return localStorage.getItem(OFF) === null;
}

export function setShortcutsOn(on: boolean): void {
  if (on) localStorage.removeItem(OFF);
  else localStorage.setItem(OFF, '1');
}

/** Runs something on a single key, unless the person is typing or has switched such keys off. */
export function useShortcut(key: string, run: () => void): void {
  useEffect(() => {
    const onKey = (event: KeyboardEvent): void => {
      if (event.key !== key || event.ctrlKey || event.metaKey || event.altKey || !shortcutsOn()) return;
      const target = event.target as HTMLElement | null;
      if (target?.closest('input, textarea, select, [contenteditable]')) return;
      event.preventDefault();
      run();
    };
    window.addEventListener('keydown', onKey);
    return () => window.removeEventListener('keydown', onKey);
  }, [key, run]);
}
