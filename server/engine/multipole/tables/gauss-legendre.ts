/**
 * Nodes and weights of Gauss–Legendre quadrature on [−1, 1], by Newton's method on the Legendre
 * polynomial. W. H. Press et al., Numerical Recipes, 3rd ed., §4.6.
 */
export function gaussLegendre(count: number): {nodes: number[]; weights: number[]} {
  const nodes: number[] = [];
  const weights: number[] = [];
  for (let i = 0; i < count; i++) {
    let x = Math.cos((Math.PI * (i + 0.75)) / (count + 0.5));
    let slope = 1;
    for (let step = 0; step < 12; step++) {
      let before = 1;
      let value = x;
      for (let k = 2; k <= count; k++) {
        [before, value] = [value, ((2 * k - 1) * x * value - (k - 1) * before) / k];
      }
      if (count === 1) before = 1;
      slope = (count * (x * value - before)) / (x * x - 1);
      x -= value / slope;
    }
    nodes.push(x);
    weights.push(2 / ((1 - x * x) * slope * slope));
  }
  return {nodes, weights};
}
