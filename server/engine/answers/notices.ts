import type {Notice} from '../../../shared/api.ts';

/** Cautions that go with every field, force and potential. */
export const notices: readonly Notice[] = [
  {
    code: 'idealised',
    detail:
      'Idealised electrostatics: charges at rest in one uniform, unbounded medium; no breakdown, no space charge, no motion.',
  },
  {
    code: 'charges-only',
    detail:
      'Only the charges given are modelled. Conductors at a voltage are not, so peak fields on metal cannot be read from these results.',
  },
  {
    code: 'not-a-substitute',
    detail:
      'No substitute for standards, tests or licensed practice in questions of insulation, clearances, exposure or work near live parts.',
  },
];
