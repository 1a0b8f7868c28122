import {HttpClient, HttpHeaders} from '@angular/common/http';
import {Injectable, inject} from '@angular/core';
import {map, type Observable} from 'rxjs';
import type {
  Estimate,
  FieldAnswer,
  ForceAnswer,
  MomentAnswer,
  Operation,
} from '../../../shared/api';

export type Answer = FieldAnswer | ForceAnswer | MomentAnswer;

export interface Run {
  readonly answer: Answer;
  readonly status: number;
  readonly requestId: string | null;
}

const headers = new HttpHeaders({'Content-Type': 'application/json'});

/** Runs requests as the signed-in person. Bodies go out as they were written, not parsed and rewritten. */
@Injectable({providedIn: 'root'})
export class RequestsApi {
  private readonly http = inject(HttpClient);

  /** What the request would cost; free of charge. Pointers in problems begin with `/request`. */
  estimate(operation: Operation, text: string): Observable<Estimate> {
    const body = `{"operation":"${operation}","request":${text}}`;
    return this.http.post<Estimate>('/console/requests/estimates', body, {headers});
  }

  run(operation: Operation, text: string): Observable<Run> {
    return this.http
      .post<Answer>(`/console/requests/${operation}`, text, {headers, observe: 'response'})
      .pipe(
        map(({body, status, headers: answered}) => {
          if (body === null) throw new TypeError('the service answered without a body');
          return {answer: body, status, requestId: answered.get('X-Request-Id')};
        }),
      );
  }
}
