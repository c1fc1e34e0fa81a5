export * from "./hazards.ts";
export { buildKnowledge, loadContractIds, loadKnowledge, readDataFile } from "./load-knowledge.ts";
export type * from "./knowledge.ts";
export { dyeComponentOf } from "./resolve-ions.ts";
export { type ContractIds, type Coverage, vocabularyCoverage } from "./vocabulary-coverage.ts";
