import {duration} from './durations';
import {columnWriter, fixed, groups, pairs, pairsText, plain, significant} from './numbers';

describe('numbers', () => {
  it('groups by three from four digits on, on both sides of the point', () => {
    expect(groups('999')).toEqual(['999']);
    expect(groups('20212423')).toEqual(['20', '212', '423']);
    expect(groups('1.2345')).toEqual(['1.234', '5']);
    expect(groups('−1234.5')).toEqual(['−1', '234.5']);
  });

  it('copies as plain digits: the groups joined are the number', () => {
    expect(groups('−20212423.1234567').join('')).toBe('−20212423.1234567');
  });

  it('writes the minus as U+2212 and zero without a sign', () => {
    expect(fixed(-1.5, 1).digits).toBe('−1.5');
    expect(fixed(-0.001, 2).digits).toBe('0.00');
    expect(significant(-0).digits).toBe('0');
  });

  it('keeps four significant digits, and is scientific below 1e-3 and from 1e7 on', () => {
    expect(significant(1234.56)).toEqual({digits: '1235', exponent: null});
    expect(significant(0.001)).toEqual({digits: '0.001000', exponent: null});
    expect(significant(3.1e-12, 2)).toEqual({digits: '3.1', exponent: -12});
    expect(significant(1.2341e7)).toEqual({digits: '1.234', exponent: 7});
    expect(plain(significant(3.1e-12, 2))).toBe('3.1 × 10^−12');
  });

  it('counts pairs exactly up to nine digits, then in giga and tera, never more than there are', () => {
    expect(pairs(387126)).toEqual({written: {digits: '387126', exponent: null}, unit: 'pairs'});
    expect(pairsText(765.8e9)).toBe('765.8 Gpairs');
    expect(pairsText(2e12)).toBe('2 Tpairs');
    expect(pairsText(9_999_999_587_400)).toBe('9.999 Tpairs');
  });

  it('writes a column with the same decimals, so that points line up', () => {
    const write = columnWriter([-864.29, 0, 1e-14]);
    expect([-864.29, 0, 1e-14].map(value => write(value).digits)).toEqual([
      '−864.29',
      '0.00',
      '0.00',
    ]);
  });
});

describe('durations', () => {
  it('have two digits, and are seconds from a second on', () => {
    expect(duration(0)).toEqual({written: {digits: '0', exponent: null}, unit: 'ms'});
    expect(duration(4.23).written.digits).toBe('4.2');
    expect(duration(412)).toEqual({written: {digits: '412', exponent: null}, unit: 'ms'});
    expect(duration(999)).toEqual({written: {digits: '1.0', exponent: null}, unit: 's'});
  });
});
