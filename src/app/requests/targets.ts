import type {Targets} from '../../../shared/api';
import {positionOf} from '../field-picture/section';
import {length, minus, plus, times, type Vector} from '../field-picture/vector';

/** Where the values of an answer are, in the length unit of the request. */
export interface Places {
  readonly count: number;
  readonly at: (index: number) => Vector;
  /** Distance along the path; null for points and grids. */
  readonly arcLength: ((index: number) => number) | null;
}

export function placesOfTargets({points, grid, path}: Targets): Places {
  if (points) {
    return {
      count: points.x.length,
      at: index => [points.x[index], points.y[index], points.z[index]],
      arcLength: null,
    };
  }
  if (grid) {
    return {
      count: grid.counts[0] * grid.counts[1] * grid.counts[2],
      at: index => positionOf(grid, index),
      arcLength: null,
    };
  }
  if (!path) return {count: 0, at: () => [0, 0, 0], arcLength: null};
  const {vertices, samples} = path;
  const along = [0];
  for (let k = 1; k < vertices.length; k++) {
    along.push(along[k - 1] + length(minus(vertices[k], vertices[k - 1])));
  }
  const whole = along[along.length - 1];
  const arcLength = (index: number): number => (samples > 1 ? (whole * index) / (samples - 1) : 0);
  return {
    count: samples,
    arcLength,
    at: index => {
      const place = arcLength(index);
      let k = 1;
      while (k < vertices.length - 1 && along[k] < place) k++;
      const share = (place - along[k - 1]) / (along[k] - along[k - 1] || 1);
      return plus(vertices[k - 1], times(minus(vertices[k], vertices[k - 1]), share));
    },
  };
}
