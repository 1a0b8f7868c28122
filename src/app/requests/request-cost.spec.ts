import {TestBed} from '@angular/core/testing';
import type {Estimate} from '../../../shared/api';
import {RequestCost} from './request-cost';

function shown(estimate: Estimate | null): string[] {
  const fixture = TestBed.createComponent(RequestCost);
  fixture.componentRef.setInput('estimate', estimate);
  fixture.detectChanges();
  const host = fixture.nativeElement as HTMLElement;
  return [...host.querySelectorAll('dd')].map(cell =>
    (cell.textContent ?? '').replaceAll(/\s+/g, ' ').trim(),
  );
}

describe('the estimate before sending', () => {
  it('names the method, and about how long', () => {
    expect(
      shown({pairs: 88_829_000, route: 'worker', method: 'multipole', milliseconds: 410}),
    ).toEqual(['88829000pairs', 'Multipole', '≈ 410ms']);
    expect(shown({pairs: 1.9415e9, route: 'worker', method: 'direct', milliseconds: 2400})).toEqual(
      ['1.941Gpairs', 'Direct sum', '≈ 2.4s'],
    );
  });

  it('says where a small call is computed, and no time that nobody could tell', () => {
    expect(shown({pairs: 1000, route: 'inline', method: 'direct', milliseconds: 0.06})).toEqual([
      '1000pairs',
      'Direct sum, inline',
      '< 1ms',
    ]);
  });

  it('shows dashes while nothing is known', () => {
    expect(shown(null)).toEqual(['–', '–', '–']);
  });
});
