'use client';
import Link from 'next/link';
import { usePathname, useRouter } from 'next/navigation';
import { useState } from 'react';
import { Menu, MenuChoice, MenuItem, MenuRule } from '@/components/ui/menu';
import { useKeys } from '@/components/ui/use-keys';
import type { UnitSystem } from '@/lib/client/format';
import { KeyHelp } from './key-help';
import { PersonItems, PersonMenu, UnitsMenu } from './person-menu';
import { PlantSwitcher, type ShellPlant } from './plant-switcher';
import { activeTab, PHONE_TABS, PLANT_TABS, plantPath, PLANTS_PATH, type PlantTab, type PlantTabKey } from './tabs';
import { useUnits } from './units-context';

export interface HeaderProps {
  person: { name: string; email: string };
  plants: readonly ShellPlant[];
  /** Absent outside a plant. */
  plantId?: string;
  /** The tabs that exist; the order is the header's own. */
  tabs: readonly PlantTabKey[];
  onSignOut: () => void;
}

/** 50 px and one ink rule: wordmark, plant, tabs, units, person. Where it is too narrow for all, the tabs are a second row. */
export function Header({ person, plants, plantId, tabs, onSignOut }: HeaderProps) {
  const pathname = usePathname();
  const router = useRouter();
  const [switching, setSwitching] = useState(false);
  const [help, setHelp] = useState(false);
  const shown = PLANT_TABS.filter(({ key }) => tabs.includes(key));
  const active = plantId === undefined ? null : activeTab(pathname, plantId);
  const go = plantId === undefined ? [] : shown.filter(({ shortcut }) => shortcut !== null);
  useKeys({
    '?': () => setHelp(true),
    ...(plantId === undefined ? {} : { '/': () => setSwitching(true) }),
    ...Object.fromEntries(
      go.map(({ key, shortcut }) => [`g ${shortcut}`, () => router.push(plantPath(plantId ?? '', key))]),
    ),
  });
  const items = { onSignOut, onShowKeys: () => setHelp(true) };
  const link = (tab: PlantTab, className = '') => (
    <TabLink
      key={tab.key}
      href={plantPath(plantId ?? '', tab.key)}
      active={tab.key === active}
      label={tab.label}
      className={className}
    />
  );
  return (
    <header className="no-print">
      <div className="border-b border-ink">
        <div className="page flex h-[50px] items-stretch gap-7">
          <Link href={PLANTS_PATH} className="flex items-center font-serif text-[1.25rem] font-semibold">
            Slackwater
          </Link>
          {plantId === undefined ? (
            <nav aria-label="Pages" className="flex phone:hidden">
              <TabLink href={PLANTS_PATH} active={pathname === PLANTS_PATH} label="Plants" />
            </nav>
          ) : (
            <>
              <div className="flex min-w-0 items-center phone:ml-auto">
                <PlantSwitcher
                  plants={plants}
                  plantId={plantId}
                  tab={active ?? 'plant'}
                  open={switching}
                  onOpenChange={setSwitching}
                />
              </div>
              <nav aria-label="Plant pages" className="flex gap-5 narrow:hidden">
                {shown.map((tab) => link(tab))}
              </nav>
            </>
          )}
          <div className="ml-auto flex min-w-0 items-center gap-6 phone:hidden">
            <UnitsMenu />
            <PersonMenu email={person.email} {...items} />
          </div>
          {plantId === undefined ? (
            <div className="ml-auto hidden shrink-0 items-center phone:flex">
              <PhoneMenu trigger="Menu" email={person.email} {...items} />
            </div>
          ) : null}
        </div>
      </div>
      {plantId === undefined ? null : (
        <nav aria-label="Plant pages" className="hidden border-b border-rule narrow:block">
          <div className="page flex h-11 items-stretch gap-7 phone:justify-between phone:gap-0">
            {shown.map((tab) => link(tab, PHONE_TABS.includes(tab.key) ? '' : 'phone:hidden'))}
            <div className="hidden items-center phone:flex">
              <PhoneMenu trigger="More" email={person.email} {...items}>
                {shown
                  .filter(({ key }) => !PHONE_TABS.includes(key))
                  .map(({ key, label }) => (
                    <MenuItem key={key} asChild>
                      <Link href={plantPath(plantId, key)} aria-current={key === active ? 'page' : undefined}>
                        {label}
                      </Link>
                    </MenuItem>
                  ))}
                <MenuRule />
              </PhoneMenu>
            </div>
          </div>
        </nav>
      )}
      <KeyHelp open={help} onOpenChange={setHelp} tabs={go} />
    </header>
  );
}

interface TabLinkProps {
  href: string;
  active: boolean;
  label: string;
  className?: string;
}

function TabLink({ href, active, label, className = '' }: TabLinkProps) {
  return (
    <Link
      href={href}
      aria-current={active ? 'page' : undefined}
      className={`relative flex items-center ${className} ${active ? 'font-semibold text-ink' : 'text-ink-2 hover:text-ink'}`}
    >
      {label}
      {active ? <span aria-hidden="true" className="absolute inset-x-0 -bottom-px h-[3px] bg-ink" /> : null}
    </Link>
  );
}

interface PhoneMenuProps {
  trigger: string;
  email: string;
  onSignOut: () => void;
  onShowKeys: () => void;
  children?: React.ReactNode;
}

const UNITS: readonly { value: UnitSystem; label: string }[] = [
  { value: 'ip', label: '°F gpm tons' },
  { value: 'si', label: '°C L/s kW' },
];

function PhoneMenu({ trigger, email, onSignOut, onShowKeys, children }: PhoneMenuProps) {
  const { units, setUnits } = useUnits();
  return (
    <Menu trigger={trigger} label={`${trigger}. Signed in as ${email}`}>
      {children}
      <MenuChoice label="Units" value={units} options={UNITS} onChange={setUnits} />
      <MenuRule />
      <PersonItems onSignOut={onSignOut} onShowKeys={onShowKeys} />
    </Menu>
  );
}
