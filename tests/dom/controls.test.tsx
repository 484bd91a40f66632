import { act, fireEvent, render, screen, waitFor } from '@testing-library/react';
import { useState } from 'react';
import { afterEach, describe, expect, test, vi } from 'vitest';
import { DirectionMark } from '@/components/marks/direction-mark';
import { Button } from '@/components/ui/button';
import { Checkbox, Field, Input } from '@/components/ui/field';
import { Dialog } from '@/components/ui/dialog';
import { Figure } from '@/components/ui/figure';
import { ProgressBar } from '@/components/ui/progress-bar';
import { Segmented } from '@/components/ui/segmented';
import { Select } from '@/components/ui/select';
import { ErrorState, LoadingWords } from '@/components/ui/states';
import { Cell, HeadCell, RowHead, Table } from '@/components/ui/table';
import { setKeysOn, useKeys } from '@/components/ui/use-keys';

describe('a field', () => {
  test('is named by its label, and its error is announced with it', () => {
    render(
      <Field label="Set-point" error="Give a number between 20 and 70." hint="As designed.">
        {(ids) => <Input {...ids} />}
      </Field>,
    );
    const input = screen.getByRole('textbox', { name: 'Set-point' });
    expect(input.getAttribute('aria-invalid')).toBe('true');
    const described = (input.getAttribute('aria-describedby') ?? '')
      .split(' ')
      .map((id) => document.getElementById(id)?.textContent);
    expect(described).toEqual(['Give a number between 20 and 70.', 'As designed.']);
  });

  test('without error or hint describes nothing', () => {
    render(<Field label="Name">{(ids) => <Input {...ids} />}</Field>);
    expect(screen.getByRole('textbox').hasAttribute('aria-describedby')).toBe(false);
  });
});

test('a check box answers to its words', () => {
  const onChange = vi.fn();
  render(
    <Checkbox checked={false} onChange={onChange}>
      Remember
    </Checkbox>,
  );
  fireEvent.click(screen.getByRole('checkbox', { name: 'Remember' }));
  expect(onChange).toHaveBeenCalledWith(true);
});

test('a segmented choice is a radio group', () => {
  const onChange = vi.fn();
  render(
    <Segmented
      label="Rank by"
      value="excess"
      onChange={onChange}
      options={[
        { value: 'excess', label: 'excess flow' },
        { value: 'cost', label: 'cost' },
      ]}
    />,
  );
  expect(screen.getByRole('radiogroup', { name: 'Rank by' })).toBeTruthy();
  expect(screen.getByRole('radio', { name: 'excess flow' }).getAttribute('aria-checked')).toBe('true');
  fireEvent.click(screen.getByRole('radio', { name: 'cost' }));
  expect(onChange).toHaveBeenCalledWith('cost');
});

test('a list opens by key, finds an entry by typing, and gives its value', async () => {
  function Role() {
    const [role, setRole] = useState<'supply' | 'return' | null>(null);
    return (
      <Select
        aria-label="Role"
        value={role}
        onChange={setRole}
        placeholder="choose a role"
        options={[
          { group: 'Loop', options: [{ value: 'supply', label: 'primary supply temp.' }] },
          { group: 'Other', options: [{ value: 'return', label: 'return temp.' }] },
        ]}
      />
    );
  }
  render(<Role />);
  const box = screen.getByRole('combobox', { name: 'Role' });
  expect(box.textContent).toBe('choose a role');
  fireEvent.keyDown(box, { key: 'ArrowDown' });
  const option = await screen.findByRole('option', { name: 'return temp.' });
  fireEvent.keyDown(option, { key: 'Enter' });
  await waitFor(() => expect(box.textContent).toBe('return temp.'));
});

test('a dialog is named by its title, and Escape closes it', async () => {
  const onOpenChange = vi.fn();
  render(
    <Dialog open onOpenChange={onOpenChange} title="Undo this file?" description="7 days will be worked out again." />,
  );
  const dialog = await screen.findByRole('dialog', { name: 'Undo this file?' });
  expect(dialog.textContent).toContain('7 days');
  fireEvent.keyDown(dialog, { key: 'Escape' });
  expect(onOpenChange).toHaveBeenCalledWith(false);
});

test('a button never submits a form by accident', () => {
  render(<Button>Confirm</Button>);
  expect(screen.getByRole('button').getAttribute('type')).toBe('button');
});

test('a missing figure has neither unit nor interval', () => {
  const { container } = render(
    <Figure unit="gpm" interval="±38">
      -
    </Figure>,
  );
  expect(container.textContent).toBe('-');
});

test('progress is told in whole percent and never over 100', () => {
  render(<ProgressBar progress={1.2} label="reading" />);
  expect(screen.getByRole('progressbar', { name: 'reading' }).getAttribute('aria-valuenow')).toBe('100');
});

test('a table names its rows and columns, and its caption is for readers', () => {
  render(
    <Table caption="Worst hours">
      <thead>
        <tr>
          <HeadCell>hour</HeadCell>
          <HeadCell numeric>cost</HeadCell>
        </tr>
      </thead>
      <tbody>
        <tr>
          <RowHead>15:00</RowHead>
          <Cell numeric>11.29</Cell>
        </tr>
      </tbody>
    </Table>,
  );
  expect(screen.getByRole('table', { name: 'Worst hours' })).toBeTruthy();
  expect(screen.getByRole('rowheader', { name: '15:00' })).toBeTruthy();
  expect(screen.getAllByRole('columnheader')).toHaveLength(2);
});

test('waiting is said only when it is long enough to notice', () => {
  vi.useFakeTimers();
  render(<LoadingWords>reading 168 hours</LoadingWords>);
  expect(screen.queryByText('reading 168 hours')).toBeNull();
  act(() => void vi.advanceTimersByTime(399));
  expect(screen.queryByText('reading 168 hours')).toBeNull();
  act(() => void vi.advanceTimersByTime(1));
  expect(screen.getByText('reading 168 hours')).toBeTruthy();
  vi.useRealTimers();
});

test('an error says what happened, what to do and what to quote', () => {
  const onRetry = vi.fn();
  render(
    <ErrorState onRetry={onRetry} reference="7f3k-20">
      The server did not answer.
    </ErrorState>,
  );
  expect(screen.getByRole('alert').textContent).toContain('reference 7f3k-20');
  fireEvent.click(screen.getByRole('button', { name: 'Try again' }));
  expect(onRetry).toHaveBeenCalledOnce();
});

test.each(['forward', 'reverse', 'still', 'unknown', 'no data'] as const)(
  'the mark of %s is named where no word stands beside it',
  (direction) => {
    render(<DirectionMark direction={direction} label={direction} />);
    expect(screen.getByRole('img', { name: direction })).toBeTruthy();
  },
);

describe('keys of the page', () => {
  afterEach(() => setKeysOn(true));

  function Keys({ bindings }: { bindings: Record<string, () => void> }) {
    useKeys(bindings);
    return <input aria-label="field" />;
  }
  const press = (key: string, target: Element = document.body, init: KeyboardEventInit = {}) =>
    fireEvent.keyDown(target, { key, ...init });

  test('single keys and two in a row', () => {
    const help = vi.fn();
    const hours = vi.fn();
    render(<Keys bindings={{ '?': help, 'g h': hours }} />);
    press('?');
    press('h');
    press('g');
    press('h');
    expect(help).toHaveBeenCalledOnce();
    expect(hours).toHaveBeenCalledOnce();
  });

  test('are silent while a field has focus, with Ctrl, and when switched off', () => {
    const help = vi.fn();
    render(<Keys bindings={{ '?': help }} />);
    press('?', screen.getByRole('textbox'));
    press('?', document.body, { ctrlKey: true });
    setKeysOn(false);
    press('?');
    expect(help).not.toHaveBeenCalled();
  });
});
