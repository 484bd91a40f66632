import { describe, expect, it } from 'vitest';
import { deliveryToken, readDeliveryToken } from '@/lib/mail/delivery-token';

const SECRET = 'a secret of the tests, longer than thirty-two characters';
const ID = '0198d4f2-7c1a-7b3e-9f00-12ab34cd56ef';
const OTHER = '0198d4f2-7c1a-7b3e-9f00-12ab34cd56ee';

describe('the token of a delivery’s links', () => {
  it('opens the delivery it was made for', () => {
    expect(readDeliveryToken(deliveryToken(ID, SECRET), SECRET)).toBe(ID);
  });

  it('is short enough for one line of a text mail, and needs no escaping', () => {
    expect(deliveryToken(ID, SECRET)).toMatch(/^[\w-]{44}$/);
  });

  it('is refused with one character changed, wherever it is', () => {
    const token = deliveryToken(ID, SECRET);
    for (let at = 0; at < token.length; at++) {
      const changed = token.slice(0, at) + (token[at] === 'A' ? 'B' : 'A') + token.slice(at + 1);
      expect(readDeliveryToken(changed, SECRET), String(at)).toBeNull();
    }
  });

  it('is refused when another delivery’s id carries its tag', () => {
    const swapped = deliveryToken(OTHER, SECRET).slice(0, 22) + deliveryToken(ID, SECRET).slice(22);
    expect(readDeliveryToken(swapped, SECRET)).toBeNull();
  });

  it('is refused under another secret', () => {
    expect(readDeliveryToken(deliveryToken(ID, SECRET), `${SECRET}!`)).toBeNull();
  });

  it.each(['', 'x', '../../etc', `${'A'.repeat(43)}=`, 'A'.repeat(45)])(
    'is refused when it is no token at all (%j)',
    (text) => {
      expect(readDeliveryToken(text, SECRET)).toBeNull();
    },
  );

  it('is not made of what is no id', () => {
    expect(() => deliveryToken('eec', SECRET)).toThrow(RangeError);
  });
});
