export { crs, crsCodes } from './crs.js';
