/** Changes whenever a change of code may change a digit of any result. Stored with every model and outlook. */
export const engineVersion = '4';
