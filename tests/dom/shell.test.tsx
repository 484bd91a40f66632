import { fireEvent, render, screen, within } from '@testing-library/react';
import { beforeEach, describe, expect, test, vi } from 'vitest';
import { AppShell, Page } from '@/components/shell/app-shell';
import { activeTab, plantPath } from '@/components/shell/tabs';
import { UnitsProvider, useFormat } from '@/components/shell/units-context';

const router = { push: vi.fn() };
const where = { pathname: '/plants/p1' };
vi.mock('next/navigation', () => ({ usePathname: () => where.pathname, useRouter: () => router }));
vi.mock('next/link', () => ({ default: 'a' }));

const PLANTS = [
  { id: 'p1', name: 'East energy centre', organizationName: 'Tern Quay Hospital campus' },
  { id: 'p2', name: 'North loop', organizationName: 'Saltgate College' },
];

function Load() {
  const print = useFormat();
  return <p>{print.with(print.load(100), 'load')}</p>;
}

function show(plantId: string | undefined = 'p1') {
  const onSignOut = vi.fn();
  render(
    <UnitsProvider initial="ip">
      <AppShell
        person={{ name: 'Engineer', email: 'engineer@demo.example' }}
        plants={PLANTS}
        plantId={plantId}
        onSignOut={onSignOut}
      >
        <Page foot={{ settingsRevision: 7, kernelVersion: '0.1.0', timeZone: 'America/New_York' }}>
          <Load />
        </Page>
      </AppShell>
    </UnitsProvider>,
  );
  return { onSignOut };
}
const open = (name: RegExp) => {
  const trigger = screen.getAllByRole('button', { name })[0];
  if (trigger === undefined) throw new Error(`no menu ${String(name)}`);
  fireEvent.keyDown(trigger, { key: 'Enter' });
};

beforeEach(() => {
  where.pathname = '/plants/p1';
  router.push.mockClear();
});

describe('tabs', () => {
  test.each([
    ['/plants/p1', 'plant'],
    ['/plants/p1/hours', 'hours'],
    ['/plants/p1/hours/2026-07-24T19:00:00Z', 'hours'],
    ['/plants/p1/uploads/u1/mapping', 'uploads'],
    ['/plants/p12/hours', null],
    ['/plants', null],
  ])('%s belongs to %s', (pathname, tab) => {
    expect(activeTab(pathname, 'p1')).toBe(tab);
  });

  test('a plant’s path is safe whatever its id holds', () => {
    expect(plantPath('a/b', 'hours')).toBe('/plants/a%2Fb/hours');
  });

  test('the page one is on is marked for readers', () => {
    where.pathname = '/plants/p1/hours';
    show();
    const [tabs] = screen.getAllByRole('navigation', { name: 'Plant pages' });
    if (tabs === undefined) throw new Error('no tabs');
    expect(within(tabs).getByRole('link', { name: 'Hours' }).getAttribute('aria-current')).toBe('page');
    expect(within(tabs).getByRole('link', { name: 'Plant' }).hasAttribute('aria-current')).toBe(false);
    expect(within(tabs).queryByRole('link', { name: 'Proof' })).toBeNull();
  });
});

test('the first thing the keyboard meets leads past the header', () => {
  show();
  const skip = screen.getByRole('link', { name: 'Skip to content' });
  expect(document.querySelector(skip.getAttribute('href') ?? '')).toBe(screen.getByRole('main'));
});

test('the foot says what the numbers rest on, and carries the caution', () => {
  show();
  const foot = screen.getByRole('contentinfo').textContent;
  expect(foot).toContain('Settings revision 7 · kernel 0.1.0 · times America/New_York');
  expect(foot).toContain('licensed engineer');
  expect(foot).toContain('writes to no control system');
});

test('another plant is reached on the same tab', () => {
  where.pathname = '/plants/p1/hours';
  show();
  open(/Change plant/);
  expect(screen.getByRole('menuitem', { name: 'North loop' }).getAttribute('href')).toBe('/plants/p2/hours');
});

test('units chosen in the header change what the page prints, and are kept', () => {
  show();
  expect(screen.getByText('100\u00a0tons', { normalizer: (text) => text })).toBeTruthy();
  open(/Change units/);
  fireEvent.click(screen.getByRole('menuitemradio', { name: '°C L/s kW' }));
  expect(screen.getByText('352\u00a0kW', { normalizer: (text) => text })).toBeTruthy();
  expect(document.cookie).toContain('slackwater-units=si');
});

test('a theme is applied at once and kept; as the system leaves it to the system', () => {
  show();
  open(/Signed in as engineer@demo.example\. Open menu/);
  fireEvent.click(screen.getByRole('menuitemradio', { name: 'dark' }));
  expect(document.documentElement.dataset.theme).toBe('dark');
  expect(document.cookie).toContain('slackwater-theme=dark');
  open(/Open menu/);
  fireEvent.click(screen.getByRole('menuitemradio', { name: 'as the system' }));
  expect(document.documentElement.dataset.theme).toBeUndefined();
});

test('signing out is in the menu of one’s name', () => {
  const { onSignOut } = show();
  open(/Open menu/);
  fireEvent.click(screen.getByRole('menuitem', { name: 'Sign out' }));
  expect(onSignOut).toHaveBeenCalledOnce();
});

describe('keys', () => {
  test('g h goes to the hours, g s to the sensors, and g x nowhere, as there is no such page', () => {
    show();
    fireEvent.keyDown(document.body, { key: 'g' });
    fireEvent.keyDown(document.body, { key: 'x' });
    expect(router.push).not.toHaveBeenCalled();
    fireEvent.keyDown(document.body, { key: 'g' });
    fireEvent.keyDown(document.body, { key: 's' });
    expect(router.push).toHaveBeenCalledWith('/plants/p1/sensors');
    fireEvent.keyDown(document.body, { key: 'g' });
    fireEvent.keyDown(document.body, { key: 'h' });
    expect(router.push).toHaveBeenCalledWith('/plants/p1/hours');
  });

  test('a slash opens the plants, a question mark the list of keys', async () => {
    show();
    fireEvent.keyDown(document.body, { key: '/' });
    expect(screen.getByRole('menuitem', { name: 'North loop' })).toBeTruthy();
    fireEvent.keyDown(screen.getByRole('menu'), { key: 'Escape' });
    fireEvent.keyDown(document.body, { key: '?' });
    const help = await screen.findByRole('dialog', { name: 'Keys' });
    expect(help.textContent).toContain('go to Plant, Hours, Sensors, Uploads');
  });
});

test('outside a plant there are no plant tabs', () => {
  where.pathname = '/plants';
  render(
    <AppShell person={{ name: 'E', email: 'e@demo.example' }} plants={PLANTS} onSignOut={() => undefined}>
      <Page>none</Page>
    </AppShell>,
  );
  expect(screen.queryByRole('navigation', { name: 'Plant pages' })).toBeNull();
  expect(screen.getByRole('link', { name: 'Plants' }).getAttribute('aria-current')).toBe('page');
});
