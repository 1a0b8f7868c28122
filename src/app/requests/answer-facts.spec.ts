import {TestBed} from '@angular/core/testing';
import {provideRouter} from '@angular/router';
import type {FieldAnswer} from '../../../shared/api';
import {accuracyLine} from './accuracy-facts';
import {AnswerFacts} from './answer-facts';
import type {FinishedRun} from './answer-view';

const units = {length: 'mm', charge: 'pC', potential: 'kV', field: 'kV/m'} as const;

const answer = (parts: Partial<FieldAnswer>): FieldAnswer => ({
  columns: {potential: [1, 2], fieldX: [1, 2], fieldY: [0, 0], fieldZ: [0, 0]},
  count: 2,
  units,
  coincident: [],
  coincidentCount: 0,
  accuracy: {method: 'direct', coincidenceDistance: 0},
  cost: {pairs: 88_829_000, queuedMilliseconds: 0.2, computedMilliseconds: 1412},
  engine: {version: '1', constants: 'CODATA 2022'},
  inputDigest: `sha-256:${'a'.repeat(64)}`,
  resultDigest: `sha-256:${'b'.repeat(64)}`,
  notices: [{code: 'idealised', detail: 'Idealised electrostatics.'}],
  ...parts,
});

const multipole = answer({
  accuracy: {
    method: 'multipole',
    coincidenceDistance: 0,
    tolerance: 2.5e-4,
    estimated: {
      potential: 1.24e-5,
      field: 8.1e-5,
      largestPotential: 6e-5,
      largestField: 0.0014,
      samples: 256,
    },
  },
});

/** Labels over values, as they are read. */
function shown(given: FieldAnswer): {facts: Map<string, string>; note: string} {
  TestBed.configureTestingModule({providers: [provideRouter([])]});
  const fixture = TestBed.createComponent(AnswerFacts);
  const run: FinishedRun = {
    answer: given,
    status: 200,
    requestId: null,
    operation: 'fields',
    text: '{}',
    name: '',
    at: new Date(0),
  };
  fixture.componentRef.setInput('run', run);
  fixture.detectChanges();
  const host = fixture.nativeElement as HTMLElement;
  const read = (element: Element | null): string =>
    (element?.textContent ?? '').replaceAll(/\s+/g, ' ').trim();
  const cells = [...host.querySelectorAll('dl > div')].map(
    cell => [read(cell.querySelector('dt')), read(cell.querySelector('dd'))] as const,
  );
  return {facts: new Map(cells), note: read(host.querySelector('p'))};
}

describe('the facts of an answer', () => {
  it('of the multipole method tell what was asked and what was estimated, and that it is no bound', () => {
    const {facts, note} = shown(multipole);
    expect(facts.get('Method')).toBe('Multipole');
    expect(facts.get('Tolerance asked')).toBe('2.5 × 10−4');
    expect(facts.get('Estimated error of V')).toBe('1.2 × 10−5 largest 6.0 × 10−5');
    expect(facts.get('Estimated error of E')).toBe('8.1 × 10−5 largest 0.0014');
    expect(note).toContain('Estimated at 256 targets');
    expect(note).toContain('not a bound');
    expect([...facts.keys()].filter(label => label.includes('bound'))).toEqual([]);
  });

  it('of potentials alone say nothing of the field', () => {
    const {facts} = shown(
      answer({
        accuracy: {
          method: 'multipole',
          coincidenceDistance: 0,
          tolerance: 1e-3,
          estimated: {potential: 1e-4, largestPotential: 2e-4, samples: 40},
        },
      }),
    );
    expect(facts.has('Estimated error of V')).toBe(true);
    expect(facts.has('Estimated error of E')).toBe(false);
  });

  it('of a direct sum with bounds give the largest of each quantity in its unit', () => {
    const {facts, note} = shown(
      answer({columns: {potentialBound: [1e-12, null, 3.14e-12], fieldBound: [2, 1, 0.5]}}),
    );
    expect(facts.get('Method')).toBe('Direct sum');
    expect(facts.get('Largest bound of V')).toBe('3.1 × 10−12kV');
    expect(facts.get('Largest bound of E')).toBe('2.0kV/m');
    expect(note).toBe('');
  });

  it('say what was reached where rounding is larger than the tolerance', () => {
    const {facts, note} = shown(
      answer({
        accuracy: {method: 'direct', coincidenceDistance: 0, tolerance: 1e-9, reached: 3.3e-8},
      }),
    );
    expect(facts.get('Tolerance asked')).toBe('1 × 10−9');
    expect(facts.get('Reached')).toBe('3.3 × 10−8');
    expect(note).toContain('rounding of direct sums');
  });

  it('tell the time, the wait and what was reused', () => {
    const {facts} = shown(
      answer({
        cost: {
          pairs: 1000,
          queuedMilliseconds: 12,
          computedMilliseconds: 1412,
          preparation: {hits: 3, misses: 1},
        },
      }),
    );
    expect(facts.get('Computed')).toBe('1.4s waited 12ms');
    expect(facts.get('Prepared forms')).toBe('3 of 4 reused');
    expect(facts.get('Charged')).toBe('1000 pairs');
  });

  it('say nothing of reuse where nothing is kept', () => {
    expect(shown(answer({})).facts.has('Prepared forms')).toBe(false);
  });

  it('give a saved picture the line of its own quantity', () => {
    expect(accuracyLine(multipole, 'E')).toEqual({
      label: 'Estimated error of E',
      value: '8.1 × 10^−5',
    });
    expect(accuracyLine(answer({}), 'V')).toBeNull();
  });
});
