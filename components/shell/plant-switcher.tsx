'use client';
import Link from 'next/link';
import { Menu, MenuItem, MenuLabel, MenuRule } from '@/components/ui/menu';
import { plantPath, PLANTS_PATH, type PlantTabKey } from './tabs';

export interface ShellPlant {
  id: string;
  name: string;
  organizationName: string;
}

export interface PlantSwitcherProps {
  plants: readonly ShellPlant[];
  plantId: string;
  /** The tab to land on in the other plant. */
  tab: PlantTabKey;
  open: boolean;
  onOpenChange: (open: boolean) => void;
}

/** The plant in view and the way to another, grouped by owner; lands on the same tab. */
export function PlantSwitcher({ plants, plantId, tab, open, onOpenChange }: PlantSwitcherProps) {
  const present = plants.find((plant) => plant.id === plantId);
  const owners = [...new Set(plants.map((plant) => plant.organizationName))];
  return (
    <Menu
      strong
      align="start"
      open={open}
      onOpenChange={onOpenChange}
      label={`Plant: ${present?.name ?? 'choose'}. Change plant`}
      trigger={present?.name ?? 'choose a plant'}
      className="phone:font-normal"
    >
      {owners.map((owner) => (
        <div key={owner} role="group" aria-label={owner}>
          <MenuLabel>{owner}</MenuLabel>
          {plants
            .filter((plant) => plant.organizationName === owner)
            .map((plant) => (
              <MenuItem key={plant.id} asChild>
                <Link href={plantPath(plant.id, tab)} aria-current={plant.id === plantId ? 'true' : undefined}>
                  <span className={plant.id === plantId ? 'font-semibold' : ''}>{plant.name}</span>
                </Link>
              </MenuItem>
            ))}
        </div>
      ))}
      <MenuRule />
      <MenuItem asChild>
        <Link href={PLANTS_PATH}>All plants</Link>
      </MenuItem>
    </Menu>
  );
}
