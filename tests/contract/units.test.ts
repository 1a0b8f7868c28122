import {expect, test} from 'vitest';

import {contract} from '../../server/contract/document.ts';
import {units} from '../../shared/units.ts';

const schemaOf = {
  length: 'LengthUnit',
  charge: 'ChargeUnit',
  potential: 'PotentialUnit',
  field: 'FieldUnit',
  fieldGradient: 'FieldGradientUnit',
  force: 'ForceUnit',
  torque: 'TorqueUnit',
  energy: 'EnergyUnit',
} as const;

test.each(Object.entries(schemaOf))(
  'the contract takes exactly the units of %s that are known',
  (dimension, name) => {
    const listed = (contract.components.schemas[name] as {enum: string[]}).enum;
    const known = [...units[dimension as keyof typeof schemaOf].keys()];
    expect([...listed].sort()).toEqual(known.sort());
  },
);
