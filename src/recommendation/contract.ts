/** The contract's public door: the schemas and types of the brief and of the recommendation document. */
export * from "./contract-brief.ts";
export * from "./contract-recommendation.ts";
export * from "./contract-limits.ts";
export * from "./contract-method-map.ts";
export * from "./contract-robustness.ts";
export * from "./contract-turning-points.ts";
export * from "./contract-vocabulary.ts";
export type { Immutable } from "./contract-immutable.ts";
