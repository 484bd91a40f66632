import { render, screen, within } from '@testing-library/react';
import { expect, test, vi } from 'vitest';
import { FormatsPage } from '@/components/formats/formats-page';
import { EXPORT_GROUPS, EXPORT_SHAPES } from '@/lib/trends/gallery';

// 88 rows by role take their time in jsdom.
vi.setConfig({ testTimeout: 20_000 });

vi.mock('next/navigation', () => ({ usePathname: () => '/formats', useRouter: () => ({ push: vi.fn() }) }));
vi.mock('next/link', () => ({ default: 'a' }));

test('the page lists every shape that is tested, in its group, with its example', () => {
  render(<FormatsPage />);
  expect(screen.getByRole('heading', { level: 1 }).textContent).toBe('What files are read');
  for (const { title, shapes } of EXPORT_GROUPS) {
    const table = screen.getByRole('table', { name: title });
    const heads = within(table).getAllByRole('rowheader');
    expect(heads.map((head) => head.textContent)).toEqual(shapes.map(({ shape }) => shape));
    for (const [row, { example }] of shapes.entries()) {
      const lines = [...(heads[row]?.nextElementSibling?.querySelectorAll('code > span') ?? [])];
      expect(lines.map((line) => line.textContent)).toEqual(example.replaceAll('\t', '    ').split('\n'));
    }
  }
});

test('it says how many shapes there are and which of them leave a question', () => {
  render(<FormatsPage />);
  const asked = EXPORT_SHAPES.filter(({ asks }) => asks !== undefined);
  const { length } = EXPORT_SHAPES;
  expect(
    screen.getByText(new RegExp(`${length} ways to write a trend .* ${length - asked.length} of them`, 's')),
  ).toBeDefined();
  expect(screen.getAllByText(/You are asked/).map((each) => each.textContent)).toEqual(
    asked.map(({ note, asks }) => `${note} You are asked ${asks}.`),
  );
});

test('its parts are reached from the list of them', () => {
  render(<FormatsPage />);
  const links = within(screen.getByRole('navigation', { name: 'On this page' })).getAllByRole('link');
  expect(links.map((link) => document.querySelector(`${link.getAttribute('href')} h2`)?.textContent)).toEqual(
    links.map((link) => link.textContent),
  );
});
