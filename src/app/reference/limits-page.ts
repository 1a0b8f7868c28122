import {ChangeDetectionStrategy, Component} from '@angular/core';
import {MULTIPOLE_PAIRS_PER_POINT} from '../../../shared/pricing';
import {NumberText} from '../format/number-text';
import {fixed} from '../format/numbers';

@Component({
  selector: 'app-limits-page',
  imports: [NumberText],
  template: `
    <h1 tabindex="-1">Cost and limits</h1>
    <p>
      The unit of cost is the pair: one charge evaluated at one target. An estimate tells the cost
      of a request before it is sent, and is free.
    </p>
    <h2>What a call costs</h2>
    <table class="ruled">
      <thead>
        <tr>
          <th scope="col">Call</th>
          <th scope="col">Pairs</th>
        </tr>
      </thead>
      <tbody>
        <tr>
          <td>Potential or field</td>
          <td>charges × targets; twice that with the gradient</td>
        </tr>
        <tr>
          <td>The same to a tolerance, by the multipole method</td>
          <td>
            a fixed number of pairs for every charge and every target: at present
            <app-number [value]="perPoint" />
          </td>
        </tr>
        <tr>
          <td>Forces</td>
          <td>every charge with the charges of all other bodies, and with every probe</td>
        </tr>
        <tr>
          <td>Bounds</td>
          <td>nothing more</td>
        </tr>
        <tr>
          <td>Any charged call</td>
          <td>at least <app-number [value]="least" /></td>
        </tr>
        <tr>
          <td>Refused and failed calls, time-outs of the service, replays, estimates</td>
          <td>nothing</td>
        </tr>
      </tbody>
    </table>
    <p>
      Whether a call with a tolerance runs by the multipole method follows from its shape and its
      options alone, so that the same request always costs the same. Where that method is not the
      quicker one, the call is a direct sum and costs one.
    </p>
    <h2>Who may spend</h2>
    <ul>
      <li>
        An account has an allowance for each calendar month in UTC. What is left at its end is not
        kept.
      </li>
      <li>A key may have a limit of its own: the part of the allowance that it may use.</li>
      <li>A key and its successor share one limit while both work.</li>
      <li>Requests in this console are charged to the account, under the source “console”.</li>
      <li>
        A key has a burst: so many calls may come within 2 s, and half of that a second, steadily.
        More are answered with 429 and the time to wait.
      </li>
    </ul>
    <h2>How large a call may be</h2>
    <table class="ruled">
      <thead>
        <tr>
          <th scope="col">What</th>
          <th scope="col" class="end">As shipped</th>
        </tr>
      </thead>
      <tbody>
        @for (row of rows; track row.what) {
          <tr>
            <td>{{ row.what }}</td>
            <td class="end num">{{ row.limit }}</td>
          </tr>
        }
      </tbody>
    </table>
    <p class="variant">
      The operator of the service may set others. The refusal names the limit that was met, and what
      was given.
    </p>
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class LimitsPage {
  protected readonly least = fixed(1000, 0);
  protected readonly perPoint = fixed(MULTIPOLE_PAIRS_PER_POINT, 0);
  protected readonly rows = [
    {what: 'Body of a request', limit: '8 MiB'},
    {what: 'Charges of one body, points of one list', limit: '100 000'},
    {what: 'Pairs of one call', limit: '2 000 000 000'},
    {what: 'Tolerance', limit: '1e-9 to 1e-3'},
    {what: 'Rows of an answer in JSON', limit: '200 000'},
    {what: 'Bodies in a call for forces', limit: '200'},
    {what: 'Computed at once, without a worker', limit: 'up to 50 000 pairs'},
    {what: 'Time to compute', limit: '30 s'},
  ];
}
