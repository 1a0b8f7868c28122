import {ChangeDetectionStrategy, Component} from '@angular/core';
import {problemCatalogue} from '../../../shared/problem-catalogue';

@Component({
  selector: 'app-errors-page',
  template: `
    <h1 tabindex="-1">Errors</h1>
    <p>
      A call that fails is answered with a problem document (RFC 9457,
      <code>application/problem+json</code>). <code>code</code> does not change;
      <code>title</code> and <code>detail</code> are for people and may. <code>errors</code> lists
      the first faults with JSON pointers to their places. Quote <code>X-Request-Id</code> when
      asking for help. Nothing is charged for a call that fails.
    </p>
    <p>
      400 means that the request could not be read, 422 that it was read and breaks the contract.
      Repeat a call only after 429, 502, 503 or 504, after <code>Retry-After</code> and with the
      same <code>Idempotency-Key</code>.
    </p>
    <div class="scroll-x" tabindex="0" role="region" aria-label="Codes of problems">
      <table class="ruled">
        <thead>
          <tr>
            <th scope="col">Status</th>
            <th scope="col">Code, what happened, and what to do</th>
          </tr>
        </thead>
        <tbody>
          @for (problem of problems; track problem.code) {
            <tr>
              <td class="num">{{ problem.status }}</td>
              <td>
                <a [href]="'/problems/' + problem.code"
                  ><code>{{ problem.code }}</code></a
                ><br />

                {{ problem.meaning }} <span class="variant">{{ problem.remedy }}</span>
              </td>
            </tr>
          }
        </tbody>
      </table>
    </div>
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class ErrorsPage {
  protected readonly problems = Object.entries(problemCatalogue).map(([code, kind]) => ({
    code,
    ...kind,
  }));
}
