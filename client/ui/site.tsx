import { createContext, type ReactNode, useContext } from 'react';
import type { ClinicDate } from '#domain/time/index';

/** The site whose day is on the screen. */
export interface CurrentSite {
  readonly siteId: number;
  readonly code: string;
  readonly name: string;
  readonly zone: string;
  readonly businessDay: ClinicDate;
}

const SiteContext = createContext<CurrentSite | null>(null);

export function SiteProvider({
  site,
  children,
}: {
  readonly site: CurrentSite;
  readonly children: ReactNode;
}) {
  return <SiteContext.Provider value={site}>{children}</SiteContext.Provider>;
}

/** The site at hand. Throws outside the frame. */
export function useSite(): CurrentSite {
  const site = useContext(SiteContext);
  if (!site) throw new Error('There is no site outside the frame');
  return site;
}
