/** The package ships without types; this is the part that the tests use. */
declare module 'density-clustering' {
  export class DBSCAN {
    readonly noise: number[];
    /** @returns for each cluster the indexes of its members */
    run(dataset: number[][], epsilon: number, minPoints: number): number[][];
  }
}
