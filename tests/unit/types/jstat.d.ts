/** The part of jstat that the tests use: an independent library to check our own distributions against. */
declare module 'jstat' {
  interface JStat {
    normal: { cdf: (x: number, mean: number, sd: number) => number, inv: (p: number, mean: number, sd: number) => number }
    binomial: { pdf: (k: number, n: number, p: number) => number, cdf: (k: number, n: number, p: number) => number }
  }
  const library: { jStat: JStat }
  export default library
}
