import {ChangeDetectionStrategy, Component} from '@angular/core';

@Component({
  selector: 'app-accuracy-page',
  template: `
    <h1 tabindex="-1">Accuracy and cautions</h1>
    <p>
      Sums are taken directly, charge by charge, in double precision and in a fixed order. The
      constants are those of CODATA 2022.
    </p>
    <h2>Bounds</h2>
    <p>
      With <code>"accuracy": {{ '{' }}"bounds": true{{ '}' }}</code> every value comes with a bound:
      the true value, for the numbers given, differs from it by no more. It is made of two parts:
      the rounding of the sum, taken from the sum of the absolute terms, so that cancellation shows;
      and the rounding of the input by units and placements. Bounds of the field are for the length
      of the difference of the two vectors, and so hold for the magnitude too. They cost nothing.
    </p>
    <p>
      A bound speaks of arithmetic. It says nothing of how well the charges describe the thing that
      is being designed.
    </p>
    <h2>The same bits every time</h2>
    <p>
      The same request gives the same bits with the same version of the engine, whatever the number
      of threads. <code>inputDigest</code> names the request, with its defaults filled in;
      <code>resultDigest</code> names the values, byte for byte. Write both into the design review.
    </p>
    <h2>Places on a charge</h2>
    <p>
      Potential and field have no value on a point charge. A target counts as lying on one if it is
      nearer than <code>coincidenceDistance</code>, or nearer than the rounding of the two
      positions. <code>onCoincidence</code> says what happens then: <code>mask</code> writes null,
      <code>exclude</code> leaves that charge out of that sum, <code>reject</code> refuses the
      request. Pictures leave masked points blank.
    </p>
    <h2>What is not in the numbers</h2>
    <ul>
      <li>Idealised electrostatics: point charges at rest in a uniform medium without bounds.</li>
      <li>
        Only the charges given are modelled. Conductors at a voltage are not, so the peak field on
        metal can not be read from these results.
      </li>
      <li>
        Nothing moves, leaks or breaks down. Whether a gap holds depends on shape, surface,
        pressure, humidity and time.
      </li>
      <li>
        Where a number is used for insulation, clearances, exposure or work near live parts: it is
        no substitute for standards, tests or licensed practice. Check local codes.
      </li>
    </ul>
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class AccuracyPage {}
