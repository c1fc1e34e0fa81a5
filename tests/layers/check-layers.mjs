// The one-way imports of src/ (DEVELOPERS.md), proved on every run; fails when it saw too few files to prove anything.
import { cruise } from "dependency-cruiser";

const MAY_IMPORT = {
  numerics: [],
  constants: ["numerics"],
  chemistry: ["numerics", "constants"],
  methods: ["numerics", "constants", "chemistry"],
  inference: ["constants"],
  recommendation: ["numerics", "constants", "chemistry", "methods", "inference"],
  report: ["constants", "recommendation"],
  register: ["constants", "recommendation"],
  web: ["constants", "recommendation", "report", "register"],
  engine: ["constants", "methods", "recommendation"],
  cli: ["constants", "inference", "recommendation", "report", "register", "web"],
};
const PACKAGES = {
  "json-rules-engine": ["inference"],
  express: ["web"],
  ejs: ["web"],
  zod: ["constants", "inference", "recommendation", "web"],
};
const folderOf = (path) => /^src\/([^/]+)\//.exec(path)?.[1];

const result = await cruise(
  ["src"],
  { doNotFollow: { path: "node_modules" }, tsPreCompilationDeps: true },
  undefined,
  {},
);
const modules = result.output.modules.filter((m) => m.source.startsWith("src/"));
const faults = [];
for (const module of modules) {
  const from = folderOf(module.source);
  for (const dependency of module.dependencies) {
    if (dependency.circular) faults.push(`${module.source}: cycle through ${dependency.resolved}`);
    const to = folderOf(dependency.resolved);
    if (from && to && to !== from && !(MAY_IMPORT[from] ?? []).includes(to))
      faults.push(`${module.source}: ${from} may not import ${to}`);
    for (const [name, allowed] of Object.entries(PACKAGES))
      if (dependency.module === name && from && !allowed.includes(from))
        faults.push(`${module.source}: only ${allowed.join(", ")} may import ${name}`);
    if (/^(node:)?fs/.test(dependency.module) && ["numerics", "chemistry", "methods"].includes(from))
      faults.push(`${module.source}: reads files in a pure layer`);
  }
}
if (modules.length < 20) faults.push(`only ${modules.length} files were inspected`);
if (modules.every((m) => m.dependencies.length === 0)) faults.push("no dependency was seen at all");
for (const fault of faults) process.stderr.write(`${fault}\n`);
process.stdout.write(`layers: ${modules.length} files, ${faults.length} faults\n`);
process.exit(faults.length === 0 ? 0 : 1);
