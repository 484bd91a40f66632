'use client';
import Link from 'next/link';
import { useState } from 'react';
import { Menu, MenuChoice, MenuItem, MenuRule } from '@/components/ui/menu';
import { keysAreOn, setKeysOn } from '@/components/ui/use-keys';
import type { UnitSystem } from '@/lib/client/format';
import { chooseTheme, currentTheme, type Theme } from './preferences';
import { PLANTS_PATH } from './tabs';
import { useUnits } from './units-context';

const UNIT_OPTIONS: readonly { value: UnitSystem; label: string }[] = [
  { value: 'ip', label: '°F gpm tons' },
  { value: 'si', label: '°C L/s kW' },
];

/** The unit system, as words of the units themselves. */
export function UnitsMenu() {
  const { units, setUnits } = useUnits();
  const present = UNIT_OPTIONS.find((option) => option.value === units)?.label ?? '';
  return (
    <Menu trigger={present} label={`Units: ${present}. Change units`}>
      <MenuChoice label="Units" value={units} options={UNIT_OPTIONS} onChange={setUnits} />
    </Menu>
  );
}

export interface PersonItemsProps {
  onSignOut: () => void;
  onShowKeys: () => void;
}

/** What belongs to the person: plants, theme, keys, the way out. Shared by the header's menu and the phone's "More". */
export function PersonItems({ onSignOut, onShowKeys }: PersonItemsProps) {
  // Mounted only while the menu is open, so the document can be asked at first render.
  const [theme, setTheme] = useState<Theme>(currentTheme);
  const [keys, setKeys] = useState<'on' | 'off'>(() => (keysAreOn() ? 'on' : 'off'));
  return (
    <>
      <MenuItem asChild>
        <Link href={PLANTS_PATH}>All plants</Link>
      </MenuItem>
      <MenuRule />
      <MenuChoice
        label="Theme"
        value={theme}
        options={[
          { value: 'system', label: 'as the system' },
          { value: 'light', label: 'light' },
          { value: 'dark', label: 'dark' },
        ]}
        onChange={(next) => {
          chooseTheme(next);
          setTheme(next);
        }}
      />
      <MenuRule />
      <MenuChoice
        label="Single-letter keys"
        value={keys}
        options={[
          { value: 'on', label: 'on' },
          { value: 'off', label: 'off' },
        ]}
        onChange={(next) => {
          setKeysOn(next === 'on');
          setKeys(next);
        }}
      />
      <MenuItem onSelect={onShowKeys}>List of keys</MenuItem>
      <MenuRule />
      <MenuItem onSelect={onSignOut}>Sign out</MenuItem>
    </>
  );
}

export function PersonMenu({ email, ...items }: PersonItemsProps & { email: string }) {
  return (
    <Menu trigger={email} label={`Signed in as ${email}. Open menu`} className="max-w-70">
      <PersonItems {...items} />
    </Menu>
  );
}
