export type KeepRule =
  | { readonly type: "broken stick" }
  | { readonly type: "eigenvalue" }
  | { readonly type: "parallel"; readonly replicates: number; readonly quantile: number }
  | { readonly type: "share"; readonly share: number }
  | { readonly type: "number"; readonly number: number };
