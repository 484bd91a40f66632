/** The pages of a plant, in the order of the header. */
export const PLANT_TABS = [
  { key: 'plant', label: 'Plant', segment: '', shortcut: 'p' },
  { key: 'hours', label: 'Hours', segment: '/hours', shortcut: 'h' },
  { key: 'sensors', label: 'Sensors', segment: '/sensors', shortcut: 's' },
  { key: 'uploads', label: 'Uploads', segment: '/uploads', shortcut: 'u' },
  { key: 'proof', label: 'Proof', segment: '/proof', shortcut: null },
  { key: 'alerts', label: 'Alerts', segment: '/alerts', shortcut: null },
  { key: 'report', label: 'Report', segment: '/report', shortcut: null },
  { key: 'settings', label: 'Settings', segment: '/settings', shortcut: null },
] as const;
export type PlantTab = (typeof PLANT_TABS)[number];
export type PlantTabKey = PlantTab['key'];

/** On a phone these stand in the row, as far as they exist; the others are behind "More". */
export const PHONE_TABS: readonly PlantTabKey[] = ['plant', 'hours', 'sensors', 'uploads'];

export const PLANTS_PATH = '/plants';
export const plantPath = (plantId: string, tab: PlantTabKey = 'plant'): string =>
  `${PLANTS_PATH}/${encodeURIComponent(plantId)}${PLANT_TABS.find(({ key }) => key === tab)?.segment ?? ''}`;

/** The tab a path belongs to: the longest that the path begins with; null outside a plant. */
export function activeTab(pathname: string, plantId: string): PlantTabKey | null {
  const root = plantPath(plantId);
  if (pathname !== root && !pathname.startsWith(`${root}/`)) return null;
  const rest = pathname.slice(root.length);
  const found = PLANT_TABS.find(
    ({ segment }) => segment !== '' && (rest === segment || rest.startsWith(`${segment}/`)),
  );
  return found?.key ?? 'plant';
}
