// The kernels of the multipole method, each in single (f32) and double (f64) precision.
export * from './multipole-points';
export * from './multipole-translate';
export * from './multipole-near';
export * from './multipole-lattice';
