import {Injectable, signal} from '@angular/core';
import type {Operation} from '../../../shared/api';

/** The request being written. It outlives the page, so that signing in again does not lose it. */
@Injectable({providedIn: 'root'})
export class RequestDraft {
  readonly operation = signal<Operation>('fields');
  /** Null until somebody has written or chosen something. */
  readonly text = signal<string | null>(null);
  readonly name = signal('');

  set(operation: Operation, text: string, name: string): void {
    this.operation.set(operation);
    this.text.set(text);
    this.name.set(name);
  }
}
