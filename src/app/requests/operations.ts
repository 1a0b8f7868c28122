import type {Operation} from '../../../shared/api';

export interface OperationChoice {
  readonly operation: Operation;
  readonly title: string;
  readonly path: string;
}

export const operations: readonly OperationChoice[] = [
  {operation: 'fields', title: 'Potential and field', path: '/v1/fields'},
  {operation: 'potentials', title: 'Potential', path: '/v1/potentials'},
  {operation: 'forces', title: 'Forces and torques', path: '/v1/forces'},
  {operation: 'moments', title: 'Moments', path: '/v1/moments'},
];
