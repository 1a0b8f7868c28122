// The kernels of the multipole method.
export {};
