import {ChangeDetectionStrategy, Component} from '@angular/core';
import {NumberText} from '../format/number-text';
import {fixed, significant} from '../format/numbers';

@Component({
  selector: 'app-accuracy-page',
  imports: [NumberText],
  templateUrl: './accuracy-page.html',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class AccuracyPage {
  protected readonly sets = fixed(1000, 0);
  protected readonly targets = fixed(38_829, 0);

  /** What the answer said, and what it was off by at all of its targets. */
  protected readonly example = [
    {
      member: 'potential',
      meaning: 'relative error of V, in least squares',
      answered: significant(3.2e-7, 2),
      measured: significant(3.2e-7, 2),
    },
    {
      member: 'field',
      meaning: 'the same of E',
      answered: significant(1.7e-6, 2),
      measured: significant(1.8e-6, 2),
    },
    {
      member: 'largestPotential',
      meaning: 'largest error of V at one target, over the root mean square of V at all',
      answered: significant(1.2e-6, 2),
      measured: significant(1.8e-6, 2),
    },
    {
      member: 'largestField',
      meaning: 'the same of E',
      answered: significant(6.2e-6, 2),
      measured: significant(1.3e-5, 2),
    },
    {
      member: 'samples',
      meaning: 'targets that were summed directly as well',
      answered: fixed(214, 0),
      measured: fixed(38_829, 0),
    },
  ];
}
