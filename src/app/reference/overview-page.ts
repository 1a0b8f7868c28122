import {ChangeDetectionStrategy, Component} from '@angular/core';
import {RouterLink} from '@angular/router';

@Component({
  selector: 'app-overview-page',
  imports: [RouterLink],
  template: `
    <h1 tabindex="-1">Reference</h1>
    <p>
      Fieldstead computes the potential, the field and the force of point charges for CAD plug-ins
      and batch scripts. A tool posts charges and the places it cares about, and gets back numbers
      with units, error bounds on request, and digests that can stand in a design review.
    </p>
    <table class="ruled">
      <thead>
        <tr>
          <th scope="col">Operation</th>
          <th scope="col">Answers</th>
        </tr>
      </thead>
      <tbody>
        <tr>
          <td><code>POST /v1/potentials</code></td>
          <td>The potential at points, on a grid or along a path</td>
        </tr>
        <tr>
          <td><code>POST /v1/fields</code></td>
          <td>Potential, field, its magnitude and its gradient, at the same places</td>
        </tr>
        <tr>
          <td><code>POST /v1/forces</code></td>
          <td>Force and torque on every body, interaction energies, forces on probes</td>
        </tr>
        <tr>
          <td><code>POST /v1/moments</code></td>
          <td>Total charge, centre, dipole and quadrupole of each body and of all together</td>
        </tr>
        <tr>
          <td><code>POST /v1/estimates</code></td>
          <td>What a call would cost and how it would run; free of charge</td>
        </tr>
        <tr>
          <td><code>GET /v1/quota</code>, <code>GET /v1/usage</code></td>
          <td>What is left of the month, and what was spent</td>
        </tr>
      </tbody>
    </table>
    <h2>Where to read on</h2>
    <ul>
      <li><a href="/docs">API reference</a>: every path, shape and bound, with examples</li>
      <li><a href="/openapi.yaml">openapi.yaml</a>: the same as a file, for generating clients</li>
      <li><a routerLink="/reference/units">Units and frames</a>: what the numbers mean</li>
      <li><a routerLink="/reference/accuracy">Accuracy and cautions</a>: how far to trust them</li>
      <li>
        <a routerLink="/reference/limits">Cost and limits</a>: what a call costs, and how large it
        may be
      </li>
      <li><a routerLink="/reference/errors">Errors</a>: every code, and what to do about it</li>
    </ul>
    <h2>A first call</h2>
    <pre tabindex="0">{{ call }}</pre>
    <p>
      A key is created by an owner of the account, on the page Keys of this console. It goes into
      the Authorization header and nowhere else.
    </p>
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class OverviewPage {
  protected readonly call = [
    `curl ${location.origin}/v1/potentials \\`,
    '  -H "Authorization: Bearer $FIELDSTEAD_KEY" \\',
    "  -H 'Content-Type: application/json' \\",
    `  -d '{"units": {"length": "mm", "charge": "nC"},`,
    `       "bodies": [{"charges": {"x": [0], "y": [0], "z": [0], "charge": [1]}}],`,
    `       "targets": {"points": {"x": [10], "y": [0], "z": [0]}}}'`,
  ].join('\n');
}
