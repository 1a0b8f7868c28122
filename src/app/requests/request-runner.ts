import {Injectable, computed, inject, signal} from '@angular/core';
import {takeUntilDestroyed, toObservable} from '@angular/core/rxjs-interop';
import {catchError, map, of, switchMap, tap, timer, type Observable, type Subscription} from 'rxjs';
import type {Estimate, Operation} from '../../../shared/api';
import {Balance} from '../frame/balance';
import {problemOf, type Problem} from '../problem/problem';
import {Session} from '../session/session';
import type {FinishedRun} from './answer-view';
import {lineOf, placesOf, syntaxFault, type Fault} from './json-places';
import {RequestDraft} from './request-draft';
import type {Finding} from './request-problem';
import {RequestsApi} from './requests-api';

/** Long texts wait longer for the typing to pause. */
const LARGE = 200_000;
const PAUSE = 400;
const LONG_PAUSE = 1200;
/** Faults that are placed in the text; the table says how many there are. */
const MOST_FAULTS = 50;

/** What the service says about a request before it is sent. */
interface Check {
  readonly text: string;
  readonly estimate: Estimate | null;
  readonly problem: Problem | null;
}

export type RunState =
  | {readonly kind: 'idle'}
  | {readonly kind: 'running'; readonly isLarge: boolean}
  | {readonly kind: 'done'; readonly run: FinishedRun}
  | {readonly kind: 'failed'; readonly problem: Problem; readonly text: string};

const notJson = (fault: Fault): Problem => ({
  status: 0,
  code: 'malformed-json',
  title: 'The request is not JSON',
  detail: `${fault.message}.`,
  type: '/problems/malformed-json',
  requestId: null,
  errors: [],
  errorCount: 0,
});

/** Checks the request as it is written, and runs it. It outlives the page, so that an answer stays. */
@Injectable({providedIn: 'root'})
export class RequestRunner {
  private readonly api = inject(RequestsApi);
  private readonly draft = inject(RequestDraft);
  private readonly session = inject(Session);
  private readonly balance = inject(Balance);
  private readonly check = signal<Check>({text: '', estimate: null, problem: null});
  private readonly syntax = signal<{text: string; fault: Fault | null}>({text: '', fault: null});
  private running: Subscription | null = null;

  readonly state = signal<RunState>({kind: 'idle'});
  readonly estimate = computed(() => this.check().estimate);
  readonly isStale = computed(() => this.check().text !== this.draft.text());
  /** What is wrong with the text as it is, by the last run or the last check. */
  readonly problem = computed<Problem | null>(() => {
    const text = this.draft.text();
    const state = this.state();
    if (state.kind === 'failed' && state.text === text) return state.problem;
    const {fault, text: parsed} = this.syntax();
    if (fault && parsed === text) return notJson(fault);
    const check = this.check();
    return check.text === text ? check.problem : null;
  });
  readonly faults = computed<readonly Fault[]>(() => {
    const text = this.draft.text() ?? '';
    const {fault, text: parsed} = this.syntax();
    if (fault && parsed === text) return [fault];
    return this.places().flatMap(place => place ?? []);
  });
  readonly findings = computed<readonly Finding[]>(() => {
    const text = this.draft.text() ?? '';
    const {fault, text: parsed} = this.syntax();
    if (fault && parsed === text) {
      return [{pointer: '', detail: fault.message, line: lineOf(text, fault.from)}];
    }
    return this.items().map((item, k) => {
      const place = this.places()[k];
      return {
        pointer: item.pointer,
        detail: item.detail,
        line: place ? lineOf(text, place.from) : null,
      };
    });
  });

  private readonly items = computed(() =>
    (this.problem()?.errors ?? []).slice(0, MOST_FAULTS).map(item => ({
      ...item,
      pointer: item.pointer.replace(/^\/request(?=\/|$)/, ''),
    })),
  );
  private readonly places = computed(() => placesOf(this.draft.text() ?? '', this.items()));

  constructor() {
    const written = computed(() => ({
      text: this.draft.text() ?? '',
      operation: this.draft.operation(),
      canRun: this.session.canRun(),
    }));
    toObservable(written)
      .pipe(
        tap(() => this.check.update(check => ({...check, text: ''}))),
        switchMap(({text, operation, canRun}) =>
          timer(text.length > LARGE ? LONG_PAUSE : PAUSE).pipe(
            switchMap(() => this.checked(operation, text, canRun)),
          ),
        ),
        takeUntilDestroyed(),
      )
      .subscribe(check => this.check.set(check));
  }

  run(): void {
    const text = this.draft.text() ?? '';
    const operation = this.draft.operation();
    const fault = syntaxFault(text);
    this.syntax.set({text, fault});
    this.running?.unsubscribe();
    if (fault) {
      this.state.set({kind: 'failed', problem: notJson(fault), text});
      return;
    }
    this.state.set({kind: 'running', isLarge: text.length > LARGE});
    this.running = this.api.run(operation, text).subscribe({
      next: run =>
        this.state.set({
          kind: 'done',
          run: {...run, operation, text, name: this.draft.name(), at: new Date()},
        }),
      error: (error: unknown) => this.state.set({kind: 'failed', problem: problemOf(error), text}),
      complete: () => void this.balance.refresh(),
    });
  }

  cancel(): void {
    this.running?.unsubscribe();
    this.state.set({kind: 'idle'});
  }

  private checked(operation: Operation, text: string, canRun: boolean): Observable<Check> {
    const fault = text === '' ? null : syntaxFault(text);
    this.syntax.set({text, fault});
    const none: Check = {text, estimate: null, problem: null};
    if (fault || text === '' || !canRun) return of(none);
    return this.api.estimate(operation, text).pipe(
      map(estimate => ({...none, estimate})),
      catchError((error: unknown) => of({...none, problem: problemOf(error)})),
    );
  }
}
