import {
  CSP_NONCE,
  ChangeDetectionStrategy,
  Component,
  DestroyRef,
  ElementRef,
  afterNextRender,
  effect,
  inject,
  input,
  output,
  untracked,
} from '@angular/core';
import {defaultKeymap, history, historyKeymap} from '@codemirror/commands';
import {json} from '@codemirror/lang-json';
import {HighlightStyle, syntaxHighlighting} from '@codemirror/language';
import {lintGutter, setDiagnostics} from '@codemirror/lint';
import {EditorState, StateEffect, StateField} from '@codemirror/state';
import {Decoration, EditorView, keymap, lineNumbers, type DecorationSet} from '@codemirror/view';
import {tags} from '@lezer/highlight';
import type {Fault} from './json-places';

/** Above this many characters, changes are handed on when typing pauses. */
const LARGE = 100_000;
const PAUSE = 250;

const setFaultyLines = StateEffect.define<readonly Fault[]>();
const faultyLine = Decoration.line({class: 'faulty'});

const faultyLines = StateField.define<DecorationSet>({
  create: () => Decoration.none,
  update(lines, transaction) {
    let now = lines.map(transaction.changes);
    for (const change of transaction.effects) {
      if (!change.is(setFaultyLines)) continue;
      const {doc} = transaction.state;
      const starts = new Set(
        change.value.map(({from}) => doc.lineAt(Math.min(from, doc.length)).from),
      );
      now = Decoration.set([...starts].sort((p, q) => p - q).map(start => faultyLine.range(start)));
    }
    return now;
  },
  provide: field => EditorView.decorations.from(field),
});

/**
 * Typing over a selection: left to itself, the browser would carry the old style over as a style
 * attribute, which the page's policy forbids.
 */
const typeOver = EditorView.domEventHandlers({
  beforeinput(event, view) {
    const isPlain = event.inputType === 'insertText' && event.data !== null && !event.isComposing;
    if (!isPlain || view.state.selection.main.empty) return false;
    event.preventDefault();
    view.dispatch(view.state.replaceSelection(event.data), {
      userEvent: 'input.type',
      scrollIntoView: true,
    });
    return true;
  },
});

const colours = HighlightStyle.define([
  {tag: tags.propertyName, color: 'var(--mat-sys-on-surface)'},
  {tag: tags.string, color: 'var(--mat-sys-primary)'},
  {tag: tags.number, color: 'var(--mat-sys-tertiary)'},
  {tag: [tags.bool, tags.null], color: 'var(--mat-sys-on-surface)', fontWeight: '600'},
  {tag: tags.punctuation, color: 'var(--mat-sys-on-surface-variant)'},
]);

const theme = EditorView.theme({
  '&': {height: '100%', color: 'var(--mat-sys-on-surface)', backgroundColor: 'transparent'},
  '&.cm-focused': {outline: '2px solid var(--mat-sys-primary)', outlineOffset: '-2px'},
  '.cm-scroller': {
    fontFamily: 'var(--fst-mono)',
    fontSize: '12.5px',
    lineHeight: '20px',
    fontVariantLigatures: 'none',
    fontFeatureSettings: '"calt" 0',
  },
  '.cm-content': {padding: '10px 0', caretColor: 'var(--mat-sys-on-surface)'},
  '.cm-line': {padding: '0 12px 0 6px'},
  '.cm-line.faulty': {
    backgroundColor: 'var(--mat-sys-error-container)',
    color: 'var(--mat-sys-on-error-container)',
  },
  '.cm-gutters': {
    backgroundColor: 'transparent',
    border: 'none',
    color: 'var(--mat-sys-on-surface-variant)',
  },
  '.cm-lineNumbers .cm-gutterElement': {minWidth: '30px', padding: '0 6px 0 0'},
  '.cm-gutter-lint': {width: '16px'},
  '.cm-selectionBackground, ::selection': {
    backgroundColor: 'var(--mat-sys-primary-container) !important',
  },
  '.cm-tooltip': {
    border: '1px solid var(--mat-sys-outline)',
    backgroundColor: 'var(--fst-dialog)',
    color: 'var(--mat-sys-on-surface)',
    fontFamily: 'var(--fst-text)',
    maxWidth: '380px',
  },
});

/** The request as JSON, with its faults marked where they are. */
@Component({
  selector: 'app-request-editor',
  template: '',
  styles: ':host { display: block; min-height: 0; overflow: hidden; }',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class RequestEditor {
  private readonly host = inject<ElementRef<HTMLElement>>(ElementRef).nativeElement;
  private readonly nonce = inject(CSP_NONCE, {optional: true});
  private view: EditorView | null = null;
  private timer: ReturnType<typeof setTimeout> | undefined;
  /** What was handed on last: the same text coming back is not a change. */
  private known = '';

  readonly text = input.required<string>();
  readonly faults = input<readonly Fault[]>([]);
  readonly textChange = output<string>();
  readonly run = output();

  constructor() {
    afterNextRender(() => this.open());
    effect(() => {
      const text = this.text();
      untracked(() => this.replace(text));
    });
    effect(() => {
      const faults = this.faults();
      untracked(() => this.mark(faults));
    });
    inject(DestroyRef).onDestroy(() => {
      clearTimeout(this.timer);
      this.view?.destroy();
    });
  }

  /** Puts the cursor on a line, numbered from 1, and brings it into view. */
  show(line: number): void {
    const {view} = this;
    if (!view) return;
    const {from} = view.state.doc.line(Math.min(Math.max(1, line), view.state.doc.lines));
    view.dispatch({
      selection: {anchor: from},
      effects: EditorView.scrollIntoView(from, {y: 'center'}),
    });
    view.focus();
  }

  private open(): void {
    this.known = this.text();
    this.view = new EditorView({
      parent: this.host,
      state: EditorState.create({
        doc: this.known,
        extensions: [
          lintGutter(),
          lineNumbers(),
          history(),
          json(),
          syntaxHighlighting(colours),
          faultyLines,
          typeOver,
          theme,
          EditorView.lineWrapping,
          this.nonce === null ? [] : EditorView.cspNonce.of(this.nonce),
          EditorView.contentAttributes.of({'aria-label': 'Request, JSON', tabindex: '0'}),
          // Tab is left to the page, so that the keyboard can leave the editor.
          keymap.of([
            {key: 'Mod-Enter', run: () => (this.run.emit(), true)},
            ...defaultKeymap,
            ...historyKeymap,
          ]),
          EditorView.updateListener.of(update => {
            if (update.docChanged) this.handOn(update.state.doc.length);
          }),
        ],
      }),
    });
    this.mark(this.faults());
  }

  private handOn(length: number): void {
    clearTimeout(this.timer);
    const emit = (): void => {
      if (!this.view) return;
      const text = this.view.state.doc.toString();
      if (text === this.known) return;
      this.known = text;
      this.textChange.emit(text);
    };
    if (length > LARGE) this.timer = setTimeout(emit, PAUSE);
    else emit();
  }

  private replace(text: string): void {
    if (!this.view || text === this.known) return;
    this.known = text;
    this.view.dispatch({
      changes: {from: 0, to: this.view.state.doc.length, insert: text},
      selection: {anchor: 0},
      effects: EditorView.scrollIntoView(0),
    });
  }

  private mark(faults: readonly Fault[]): void {
    if (!this.view) return;
    const {length} = this.view.state.doc;
    const inside = faults.filter(({from}) => from <= length);
    const diagnostics = inside.map(({from, to, message}) => ({
      from,
      to: Math.min(to, length),
      severity: 'error' as const,
      message,
    }));
    this.view.dispatch(setDiagnostics(this.view.state, diagnostics), {
      effects: setFaultyLines.of(inside),
    });
  }
}
