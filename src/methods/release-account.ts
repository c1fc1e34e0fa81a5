import type { ComponentId } from "../constants/knowledge.ts";
import { closed, type LedgerLine, type StageAccount } from "./account.ts";
import type { ReleaseVessels } from "./release-vessels.ts";
import type { StageModel, VesselState } from "./stage-model.ts";

interface Reading {
  readonly model: StageModel;
  readonly volumeL: number;
  readonly state: VesselState;
}

/** mol of a metal that the titrant holds at a reading, frozen complexes included. */
function boundMol({ model, volumeL, state }: Reading, metal: ComponentId): number {
  const frozen = model.held
    .filter((h) => h.component === metal && h.why === "kinetically-inert")
    .reduce((s, h) => s + h.molPerL * model.volumeL, 0);
  return state.boundToTitrant(metal) * (model.volumeL + volumeL) + frozen;
}

/**
 * Where the titre of a release comes from. Between its two end points the titrant in the vessel is the same, so what the burette
 * brings (less what both readings leave unbound) is the sum of bound(before) - bound(after) over all metals but the one run in:
 * a metal of the sample that the back titrant also is cancels, one that stays bound gives nothing.
 */
export function releaseAccount(vessels: ReleaseVessels, first: Reading, second: Reading): StageAccount {
  const { presentMol, sampleMol } = vessels;
  const back = first.model.burette;
  const determined = new Set(vessels.determines);
  const foundMol = back.molPerL * (second.volumeL - first.volumeL);
  const titrated = new Map<ComponentId, number>();
  const biasOf = new Map<ComponentId, number>();
  const ledger: LedgerLine[] = [];
  let counted = 0;
  for (const [metal, mol] of sampleMol) {
    if (metal === back.component || mol <= 0) continue;
    const released = boundMol(first, metal) - boundMol(second, metal);
    counted += released;
    titrated.set(metal, released / mol);
    if (determined.has(metal)) {
      const never = boundMol(first, metal) - mol;
      ledger.push({ source: `${metal} not bound by the excess`, fraction: never / presentMol });
      ledger.push({ source: `${metal} not freed`, fraction: (released - mol - never) / presentMol });
    } else {
      biasOf.set(metal, released / presentMol);
      ledger.push({ source: metal, fraction: released / presentMol });
    }
  }
  if (sampleMol.has(back.component)) {
    titrated.set(back.component, 0);
    biasOf.set(back.component, 0);
  }
  ledger.unshift({ source: "end-point", fraction: (foundMol - counted) / presentMol });
  const unbound = vessels.determines.reduce((s, m) => s + first.state.unbound(m), 0);
  return closed(presentMol, {
    foundMol,
    ledger,
    titrated,
    biasOf,
    backTitrantStealsFraction: (unbound * (first.model.volumeL + first.volumeL)) / presentMol,
  });
}
