declare module 'jstat' {
  interface Law {
    inv(p: number, ...parameters: number[]): number;
    cdf(x: number, ...parameters: number[]): number;
    pdf(x: number, ...parameters: number[]): number;
  }
  export const jStat: {
    gamma: Law;
    chisquare: Law;
    normal: Law;
    binomial: Law;
    poisson: Law;
    gammaln(x: number): number;
  };
}
