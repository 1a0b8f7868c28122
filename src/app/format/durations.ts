import {significant, type WrittenNumber} from './numbers';

/** A time as it is written: whole milliseconds or two digits, from a second on seconds. */
export interface WrittenDuration {
  readonly written: WrittenNumber;
  readonly unit: 'ms' | 's';
}

export function duration(milliseconds: number): WrittenDuration {
  // From here on, two digits of a second are 1.0.
  return milliseconds < 995
    ? {written: significant(milliseconds, 2), unit: 'ms'}
    : {written: significant(milliseconds / 1000, 2), unit: 's'};
}
