export * from './errors.js';
export * from './quantity.js';
export * from './units.js';
export * from './view.js';
