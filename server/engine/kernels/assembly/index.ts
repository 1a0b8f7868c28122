export * from './direct';
export * from './multipole';
