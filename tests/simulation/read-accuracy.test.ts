import { expect, test } from 'vitest';
import { readAccuracy } from '../support/read-accuracy';

const PRINTED = `
plant                                 given    right     >5 %   rmse b   gain %
both-meters varied 1000              0.9931   0.9698   1.0000   0.0104   0.3833
temperatures variable                0.9853   0.9992   0.9992   0.0564        -  share

all: 49 plants, 90166 running intervals
    answered                                 0.9936   >= 0.98
  * direction right, |b| > 5 %               0.9931   >= 0.995
  *   worst plant                            0.8597   >= 0.97
    RMSE of b, share of design               0.0264   
    coverage of b                            0.9378   >= 0.85 <= 0.97

near balance: 12 plants, 22764 running intervals
  * Brier score                              0.0931   <= 0.06

estimated and scored in 15.5 s
`;

test('what the accuracy bench prints is read with its goals, a further measure under the one above it', () => {
  const { groups } = readAccuracy(PRINTED);
  expect(groups).toEqual({
    all: {
      plants: 49,
      intervals: 90166,
      measures: {
        answered: { value: 0.9936, atLeast: 0.98 },
        'direction right, |b| > 5 %': { value: 0.9931, atLeast: 0.995 },
        'direction right, |b| > 5 %: worst plant': { value: 0.8597, atLeast: 0.97 },
        'RMSE of b, share of design': { value: 0.0264 },
        'coverage of b': { value: 0.9378, atLeast: 0.85, atMost: 0.97 },
      },
    },
    'near balance': { plants: 12, intervals: 22764, measures: { 'Brier score': { value: 0.0931, atMost: 0.06 } } },
  });
});

test('plants are read by their name, a measure that one does not have left out', () => {
  const { plants } = readAccuracy(PRINTED);
  expect(plants['both-meters varied 1000']).toEqual({
    given: 0.9931,
    right: 0.9698,
    '>5 %': 1,
    'rmse b': 0.0104,
    'gain %': 0.3833,
  });
  expect(plants['temperatures variable']).toEqual({ given: 0.9853, right: 0.9992, '>5 %': 0.9992, 'rmse b': 0.0564 });
});

test('a text without any group is refused', () => {
  expect(() => readAccuracy('estimated and scored in 1.0 s\n')).toThrow('no group');
});
