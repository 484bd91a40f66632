import { describe, expect, it, test } from 'vitest';
import { bindFormat } from '@/components/shell/units-context';
import { checkableRoles, emptyForm, spotCheckBody, type SpotCheckForm } from '@/components/sensors/spot-check-values';
import { roundReach, sensorsBlock, sensorsLead } from '@/components/sensors/sensors-words';
import { stretchWords } from '@/components/sensors/stretch-line';
import { limitSentence, sensorEvidence, sensorName, suspicionSentence } from '@/lib/client/sensor-words';
import { CALIBRATION_LIMITS } from '@/lib/schemas/sensors';
import { sensor, sensorsAnswer } from '../support/sensors';

const ip = bindFormat('ip');
const plain = (text: string) => text.replaceAll('\u00a0', ' ');
const warm = sensor('secondarySupplyTemp', { offset: [0.6, 0.4, 0.8], use: 'corrected' });
const low = sensor('primaryFlow', { gain: [-2.1, -3.9, -0.4], use: 'corrected', tie: 'flow-balance' });
const fine = sensor('primarySupplyTemp', { offset: [-0.1, -0.3, 0.1] });

describe('the finding of the sensors page', () => {
  const lead = (sensors: Parameters<typeof sensorsAnswer>[0], more = {}) =>
    plain(sensorsLead(sensorsAnswer(sensors, more), ip));

  it('names the surest doubt first, by how much, and what was done about it', () => {
    expect(lead([fine, low, warm])).toBe(
      'Doubt secondary supply first: it reads 0.6 °F warm. The primary flow reads 2.1 % low. Both are corrected in the answer and should be checked at the pipe.',
    );
    expect(lead([fine, warm])).toBe(
      'Doubt secondary supply: it reads 0.6 °F warm. It is corrected in the answer and should be checked at the pipe.',
    );
  });
  it('says so when there is nothing to doubt, and when nothing could be told', () => {
    expect(lead([fine])).toContain('No sensor shows a lasting error');
    expect(lead([fine], { limits: [{ limit: 'too-short', sentence: '' }] })).toContain('Too little running record');
    expect(lead([fine], { calibration: null })).toContain('has not been worked out yet');
    expect(lead([sensor('primaryFlow', { points: [] })])).toBe('No sensor has been sent yet.');
  });
  it('puts the mapping before everything else', () => {
    const suspicions = [
      { kind: 'swapped', sensors: ['Primary supply', 'Primary return'], looksLike: '', share: 1, sentence: '' },
    ];
    expect(lead([warm], { suspicions })).toBe(
      'Look at the mapping first: primary supply and primary return look exchanged.',
    );
  });
  it('comes with how well the measurements fit and how many were corrected', () => {
    expect(sensorsBlock(sensorsAnswer([fine, low, warm])).map(({ value }) => plain(value))).toEqual([
      '98.1 % of intervals pass',
      'median 1.7, limit 6.0',
      '2 of 3 sensors',
    ]);
  });
});

describe('the evidence of a sensor', () => {
  const told = (...args: Parameters<typeof sensor>) => plain(sensorEvidence(sensor(...args), 'ip'));
  it('says which physics ties it, over how many hours, and what it comes to', () => {
    expect(plain(sensorEvidence(warm, 'ip'))).toBe(
      'In 200 hours of clear forward flow the two supplies must agree: it reads 0.6 ±0.2 °F warm.',
    );
    expect(plain(sensorEvidence(fine, 'ip'))).toContain('they do, within 0.3 °F');
    expect(plain(sensorEvidence(low, 'si'))).toContain('2.1 ±1.8 % low');
    expect(plain(sensorEvidence(warm, 'si'))).toContain('0.3 ±0.1 K warm');
  });
  it('says when nothing tells, nothing compares, nothing came', () => {
    expect(told('bypassTemp', { offset: [0, -0.8, 0.8], tie: 'none' })).toContain(
      'taken as its class says, within 0.8 °F',
    );
    expect(told('plantPower', {})).toContain('no second measurement');
    expect(told('outdoorTemp', { use: 'shown only' })).toBe('Does not enter the balance.');
    expect(told('bypassTemp', { points: [] })).toBe('Never sent.');
    expect(told('primaryFlow', { use: 'left out' })).toContain('Nothing that passed');
  });
  it('names what was left out', () => {
    const stretches = [
      { kind: 'stuck' as const, from: '2026-07-18T10:00:00Z', to: '2026-07-18T16:00:00Z' },
      { kind: 'missing' as const, from: '2026-07-19T10:00:00Z', to: '2026-07-19T12:00:00Z' },
    ];
    expect(told('primaryFlow', { stretches })).toContain('Stuck 6 h in this period, left out.');
    expect(stretchWords(stretches, false)).toBe('stuck 6 h, missing 2 h');
  });
});

test.each(CALIBRATION_LIMITS)('what cannot be told (%s) comes with what would settle it', (limit) => {
  expect(limitSentence(limit)).toMatch(/settles it|tells much more/);
});

test('a suspicion says what to do, in units as people write them', () => {
  const wrong = { kind: 'wrong-unit' as const, looksLike: 'degC read as degF', share: 0.97 };
  expect(plain(suspicionSentence(wrong, ['Primary supply']))).toBe(
    'Primary supply looks like values in °C read as °F in 97 % of the running intervals. Set its unit in the file’s mapping and send it again.',
  );
});

test('a sensor is named as the trade does, one of several with its number', () => {
  expect([sensorName('secondarySupplyTemp'), sensorName('unitFlow', 2), sensorName('bypassFlow')]).toEqual([
    'Secondary supply',
    'Unit flow 2',
    'Bypass flow',
  ]);
});

test('the shared axis ends at a round figure that holds every whisker', () => {
  expect([roundReach(0.8, [0.5, 1, 2]), roundReach(0, [0.5, 1, 2]), roundReach(7.2, [0.5, 1, 2])]).toEqual([1, 0.5, 8]);
});

describe('a spot check as typed', () => {
  const ZONE = 'America/New_York';
  const form = (more: Partial<SpotCheckForm>): SpotCheckForm => ({
    ...emptyForm('secondarySupplyTemp', Date.parse('2026-07-24T19:10:00Z'), ZONE, 'ip'),
    ...more,
  });
  it('goes out in the API’s units at the plant’s clock', () => {
    expect(spotCheckBody(form({ reading: '44.1', shown: '44.5' }), ZONE, 'ip')).toMatchObject({
      body: { at: '2026-07-24T19:10:00Z', role: 'secondarySupplyTemp', readingF: 44.1, shownF: 44.5, sigmaF: 0.1 },
    });
    const si = spotCheckBody(form({ reading: '7', sigma: '0.05' }), ZONE, 'si');
    expect(si).toMatchObject({ body: { readingF: 44.6, sigmaF: 0.09 } });
    const flow = spotCheckBody(form({ role: 'primaryFlow', reading: '1,720', sigma: '2' }), ZONE, 'ip');
    expect(flow).toMatchObject({ body: { readingGpm: 1720, sigmaPercent: 2 } });
    expect(flow).not.toHaveProperty('body.readingF');
  });
  it.each([
    ['nothing read', { reading: '' }, 'reading'],
    ['a word', { reading: 'cold' }, 'reading'],
    ['degrees of another scale', { reading: '6.7' }, 'reading'],
    ['no time', { reading: '44', at: '' }, 'at'],
    ['no uncertainty at all', { reading: '44', sigma: '0' }, 'sigma'],
  ])('with %s is told so at its field', (_, more, field) => {
    const made = spotCheckBody(form(more), ZONE, 'ip');
    expect('errors' in made && Object.keys(made.errors)).toContain(field);
  });
  it('is offered for the sensors the plant has, and for the pumps’ rated flow where nothing meters production', () => {
    expect(checkableRoles(['primarySupplyTemp', 'unitStatus'])).toEqual(['primarySupplyTemp', 'ratedFlow']);
    expect(checkableRoles(['unitFlow', 'bypassFlowUnsigned'])).toEqual(['primaryFlow', 'bypassFlow']);
  });
});
