export * from './integral-set';
export * from './raw';
export * from './readers';
export * from './source';
export * from './terms';
