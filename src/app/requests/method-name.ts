import type {Estimate} from '../../../shared/api';

/** How sums are evaluated, as people say it. */
export const methodName: Readonly<Record<Estimate['method'], string>> = {
  direct: 'Direct sum',
  multipole: 'Multipole',
};
