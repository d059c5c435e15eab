export * from './accounts';
export * from './courses';
export * from './experiments';
export * from './files';
export * from './marking';
export * from './work';
export * from './relations';
