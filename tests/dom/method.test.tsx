import { render, screen, within } from '@testing-library/react';
import { describe, expect, test, vi } from 'vitest';
import { ACCURACY, groupOf, keepsGoal, measureOf, RIGHT_BEYOND_5 } from '@/components/method/accuracy';
import { MethodPage } from '@/components/method/method-page';
import { Foot } from '@/components/shell/foot';
import { KERNEL_VERSION } from '@/lib/hydronics/types';

vi.mock('next/navigation', () => ({ usePathname: () => '/method', useRouter: () => ({ push: vi.fn() }) }));
vi.mock('next/link', () => ({ default: 'a' }));

const cell = (table: HTMLElement, row: string, column: number): string => {
  const head = within(table).getByRole('rowheader', { name: row });
  return head.closest('tr')?.children[column]?.textContent ?? '';
};

test('the page has its parts in order, each reached from the list of them', () => {
  render(<MethodPage />);
  expect(screen.getByRole('heading', { level: 1 }).textContent).toBe('How it is worked out');
  const titles = screen.getAllByRole('heading', { level: 2 }).map((heading) => heading.textContent);
  expect(titles).toEqual([
    '1. What is asked',
    '2. Two tees and a pipe',
    '3. One interval',
    '4. The whole record',
    '5. Before any of it',
    '6. How well it does',
    '7. Held against the outside',
    '8. Sources',
    '9. How to check it yourself',
  ]);
  const links = within(screen.getByRole('navigation', { name: 'On this page' })).getAllByRole('link');
  expect(links.map((link) => link.textContent)).toEqual(titles);
  for (const link of links) {
    const part = document.querySelector(link.getAttribute('href') ?? '');
    expect(part?.querySelector('h2')?.textContent).toBe(link.textContent);
  }
});

test('the foot of every page leads there', () => {
  render(<Foot />);
  expect(screen.getByRole('link', { name: 'How it is worked out' }).getAttribute('href')).toBe('/method');
});

test('what a number is never to be taken for stands in the first part', () => {
  render(<MethodPage />);
  const first = screen.getByRole('region', { name: '1. What is asked' });
  expect(first.textContent).toContain('no control signal, no set-point, no protection');
  expect(first.textContent).toContain('licensed engineer');
});

test('the smallest share that temperatures tell is computed: 5.9 % for 0.25 °F over 12 °F', () => {
  render(<MethodPage />);
  const table = screen.getByRole('table', { name: 'Smallest share that temperatures tell from zero' });
  expect(cell(table, '0.25\u00a0°F', 5)).toBe('5.9');
});

describe('the figures of accuracy', () => {
  test('are of the present kernel: after a change, run tests/bench/write-accuracy.ts', () => {
    expect(ACCURACY.kernelVersion).toBe(KERNEL_VERSION);
  });

  test('are those that the bench printed, and the lead states them', () => {
    render(<MethodPage />);
    const value = measureOf(groupOf('all'), RIGHT_BEYOND_5).value;
    expect(value).toBeGreaterThan(0.9);
    const table = screen.getByRole('table', { name: /^Accuracy on simulated plants/ });
    expect(cell(table, 'where over 5\u00a0% of secondary flow crosses over', 1)).toContain(value.toFixed(4));
    expect(screen.getByRole('main').textContent).toContain(`right in ${(100 * value).toFixed(1)}\u00a0%`);
  });

  test('that fall short of their goal say so, and the others do not', () => {
    render(<MethodPage />);
    const table = screen.getByRole('table', { name: /^Accuracy on simulated plants/ });
    const near = groupOf('near balance');
    for (const [row, measure] of [
      ['Brier score of the probability of reverse', 'Brier score'],
      ['bypass error over the textbook’s', 'RMSE of b / textbook'],
    ] as const) {
      const short = cell(table, row, 3).includes('short of its goal');
      expect(short).toBe(!keepsGoal(measureOf(near, measure)));
    }
  });

  test('leave no cell of any table of theirs without a figure', () => {
    render(<MethodPage />);
    const part = screen.getByRole('region', { name: '6. How well it does' });
    for (const table of within(part).getAllByRole('table')) {
      for (const each of within(table).getAllByRole('cell')) expect(each.textContent).not.toBe('-');
    }
  });
});
