import {ChangeDetectionStrategy, Component} from '@angular/core';
import {units, type Dimension} from '../../../shared/units';

const NAMES: readonly (readonly [Dimension, string, string])[] = [
  ['length', 'Length', 'length'],
  ['charge', 'Charge', 'charge'],
  ['potential', 'Potential', 'potential'],
  ['field', 'Field', 'field'],
  ['fieldGradient', 'Field gradient', 'fieldGradient'],
  ['force', 'Force', 'force'],
  ['torque', 'Torque', 'torque'],
  ['energy', 'Energy', 'energy'],
];

/** One symbol for each unit: the second code points of µ and Å look the same. */
const shown = (dimension: Dimension): string =>
  [...units[dimension].keys()].filter(symbol => !/[μÅ]/.test(symbol)).join('  ');

@Component({
  selector: 'app-units-page',
  template: `
    <h1 tabindex="-1">Units and frames</h1>
    <p>
      A request names the units it is written in, and the answer comes in the units it names. Every
      unit that is not named is the SI unit, the first in each row. The lists are closed: another
      unit is refused with the code <code>unknown-unit</code>.
    </p>
    <table class="ruled">
      <thead>
        <tr>
          <th scope="col">Dimension</th>
          <th scope="col">Member of “units”</th>
          <th scope="col">Units</th>
        </tr>
      </thead>
      <tbody>
        @for (row of rows; track row.member) {
          <tr>
            <td>{{ row.name }}</td>
            <td>
              <code>{{ row.member }}</code>
            </td>
            <td>
              <code>{{ row.units }}</code>
            </td>
          </tr>
        }
      </tbody>
    </table>
    <p class="variant">
      Both code points of µ and of Å are taken. Factors are exact powers of ten wherever they are
      one, so that the same request in mm and in m gives the same bits.
    </p>
    <h2>Frames</h2>
    <p>
      Coordinates are right-handed. A body may carry a placement that puts it in place: rotate
      first, about the body's own origin and by the right-hand rule, then translate in the length
      unit of the request; p′ = R p + t. A placement is either <code>translate</code> and
      <code>rotate</code>, or a <code>matrix</code> of 16 numbers, row by row, for column vectors.
      Matrices from single-precision programs are taken if RᵀR differs from 1 by no more than
      10<sup>−6</sup>, and are made orthonormal; the matrix used is in the answer. Reflections,
      scales and shears are refused.
    </p>
    <h2>Where values sit</h2>
    <ul>
      <li>Points are columns x, y and z of equal length.</li>
      <li>
        A grid has an origin, three step vectors and three counts. Values sit on the grid points,
        and the first step varies fastest. A count of 1 may have a step of zero.
      </li>
      <li>
        A path is a polyline, sampled at equal distances along it from its first to its last corner.
      </li>
    </ul>
    <h2>Signs</h2>
    <ul>
      <li>The potential is zero at infinity and positive near positive charge.</li>
      <li>
        The field points away from positive charge. Gradients are ∂E<sub>i</sub>/∂x<sub>j</sub>.
      </li>
      <li>
        The energy of bodies is the work to bring them from infinity as they are; what it took to
        make each of them is left out unless it is asked for.
      </li>
      <li>
        The medium is uniform and has no bounds. Potential, field, force and energy are divided by
        its relative permittivity; the charges given are free charges.
      </li>
    </ul>
  `,
  styles: `
    td:last-child code {
      white-space: pre-wrap;
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class UnitsPage {
  protected readonly rows = NAMES.map(([dimension, name, member]) => ({
    name,
    member,
    units: shown(dimension),
  }));
}
