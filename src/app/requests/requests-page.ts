import {BreakpointObserver} from '@angular/cdk/layout';
import {NgTemplateOutlet} from '@angular/common';
import {
  ChangeDetectionStrategy,
  Component,
  computed,
  effect,
  inject,
  input,
  signal,
  viewChild,
} from '@angular/core';
import {toSignal} from '@angular/core/rxjs-interop';
import {MatButton} from '@angular/material/button';
import {MatFormField, MatLabel} from '@angular/material/form-field';
import {MatMenu, MatMenuItem, MatMenuTrigger} from '@angular/material/menu';
import {MatOption, MatSelect, MatSelectTrigger} from '@angular/material/select';
import {MatTabLink, MatTabNav, MatTabNavPanel} from '@angular/material/tabs';
import {Router} from '@angular/router';
import {map} from 'rxjs';
import type {Operation} from '../../../shared/api';
import {PairsText} from '../format/pairs-text';
import {Icon} from '../icon/icon';
import {Session} from '../session/session';
import {Announcer} from '../states/announcer';
import {AnswerFacts} from './answer-facts';
import {AnswerView} from './answer-view';
import {operations} from './operations';
import {RequestCost} from './request-cost';
import {RequestDraft} from './request-draft';
import {RequestEditor} from './request-editor';
import {RequestProblem} from './request-problem';
import {RequestRunner} from './request-runner';
import {RequestSnippet} from './request-snippet';
import {samples, type Sample} from './samples';

const PAGES = ['request', 'picture', 'numbers', 'snippet'] as const;
type NarrowPage = (typeof PAGES)[number];

@Component({
  selector: 'app-requests-page',
  imports: [
    AnswerFacts,
    AnswerView,
    Icon,
    MatButton,
    MatFormField,
    MatLabel,
    MatMenu,
    MatMenuItem,
    MatMenuTrigger,
    MatOption,
    MatSelect,
    MatSelectTrigger,
    MatTabLink,
    MatTabNav,
    MatTabNavPanel,
    NgTemplateOutlet,
    PairsText,
    RequestCost,
    RequestEditor,
    RequestProblem,
    RequestSnippet,
  ],
  templateUrl: './requests-page.html',
  styleUrl: './requests-page.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class RequestsPage {
  private readonly router = inject(Router);
  private readonly announcer = inject(Announcer);
  private readonly editor = viewChild(RequestEditor);
  protected readonly draft = inject(RequestDraft);
  protected readonly runner = inject(RequestRunner);
  protected readonly session = inject(Session);

  /** The page shown on a narrow sheet, from the address. */
  readonly view = input<string>();

  protected readonly operations = operations;
  protected readonly samples = samples;
  protected readonly pages = PAGES;
  protected readonly isNarrow = toSignal(
    inject(BreakpointObserver)
      .observe('(max-width: 599.98px)')
      .pipe(map(state => state.matches)),
    {initialValue: false},
  );
  protected readonly page = computed<NarrowPage | null>(() =>
    this.isNarrow() ? (PAGES.find(page => page === this.view()) ?? 'request') : null,
  );
  protected readonly only = computed(() => {
    const page = this.page();
    return page === 'picture' || page === 'numbers' ? page : null;
  });
  protected readonly choice = computed(
    () => operations.find(({operation}) => operation === this.draft.operation()) ?? operations[0],
  );
  protected readonly isSlow = signal(false);

  protected readonly finished = computed(() => {
    const state = this.runner.state();
    return state.kind === 'done' ? state.run : null;
  });
  protected readonly failure = computed(() => {
    const state = this.runner.state();
    return state.kind === 'failed' ? state.problem : null;
  });
  /** Whether the text is still the one that failed, so that its lines can be named. */
  protected readonly isCurrent = computed(() => {
    const state = this.runner.state();
    return state.kind === 'failed' && state.text === this.draft.text();
  });

  constructor() {
    if (this.draft.text() === null) this.choose(samples[0]);
    effect(onCleanup => {
      const state = this.runner.state();
      this.isSlow.set(false);
      if (state.kind === 'running') {
        const timer = setTimeout(() => this.isSlow.set(true), 300);
        onCleanup(() => clearTimeout(timer));
      }
      if (state.kind === 'done') this.announcer.say('Computed');
    });
  }

  protected choose(sample: Sample): void {
    this.draft.set(sample.operation, sample.text(), sample.name);
  }

  protected setOperation(operation: Operation): void {
    this.draft.operation.set(operation);
  }

  protected run(): void {
    this.runner.run();
    if (this.isNarrow() && this.page() === 'request') this.open('picture');
  }

  protected open(view: NarrowPage): void {
    void this.router.navigate([], {queryParams: {view}, replaceUrl: true});
  }

  protected showLine(line: number): void {
    if (this.isNarrow()) this.open('request');
    // The editor is in the document again after the next frame.
    requestAnimationFrame(() => this.editor()?.show(line));
  }

  protected titleOf(page: NarrowPage): string {
    return page[0].toUpperCase() + page.slice(1);
  }
}
