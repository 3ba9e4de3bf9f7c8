/** The whole schema, in the order in which data flows. */
export * from './auth';
export * from './team';
export * from './participant';
export * from './device';
export * from './study';
export * from './session';
export * from './recording';
export * from './alignment';
export * from './annotation';
export * from './review';
export * from './audit';
