import { RuleError } from "../errors.ts";
import { exampleFacts } from "./check-rule.ts";
import { inspectRules, readRuleFiles, type RuleFile } from "./load-rules.ts";
import { createRuleRunner } from "./run-rules.ts";
import type { Rule } from "./rule-schema.ts";

/**
 * Checks every rule of a folder (or of files already read) as the loader does, and then every example once more in the engine itself.
 * Returns the sound rules and one fault per error; a folder that cannot be read is a fault.
 */
export async function checkRules(
  source: string | readonly RuleFile[],
): Promise<{ readonly rules: readonly Rule[]; readonly faults: readonly RuleError[] }> {
  let files: readonly RuleFile[];
  try {
    files = typeof source === "string" ? readRuleFiles(source) : source;
  } catch (error) {
    if (error instanceof RuleError) return { rules: [], faults: [error] };
    throw error;
  }
  const { base, faults } = inspectRules(files);
  const runner = createRuleRunner(base);
  const disagreements: RuleError[] = [];
  for (const rule of base.rules)
    for (const kind of ["fires", "silent"] as const)
      for (const [i, example] of rule.examples[kind].entries()) {
        const findings = await runner.run(rule.scope, exampleFacts(rule.scope, example));
        if (findings.some((finding) => finding.rule === rule.id) !== (kind === "fires"))
          disagreements.push(
            new RuleError(rule.id, `${rule.file} .examples.${kind}[${i}]`, "the engine disagrees with the example"),
          );
      }
  return { rules: base.rules, faults: [...faults, ...disagreements] };
}
