/** The parts of jstat (which carries no types) that this package uses. */
declare module "jstat" {
  interface BetaDistribution {
    /** Quantile of the beta distribution; about 1e-7 relative. */
    inv(probability: number, alpha: number, beta: number): number;
    /** Cumulative distribution of the beta distribution; about 3e-7 relative. */
    cdf(x: number, alpha: number, beta: number): number;
  }
  const jStat: { readonly beta: BetaDistribution };
  export default jStat;
}
