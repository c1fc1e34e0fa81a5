import type { ComponentId, ComponentRecord, DataRemark } from "./knowledge.ts";
import type { PracticeData } from "./load-practice.ts";

/** Finds the component that a canonical spelling means ("ZrO2+" and "Zr4+" are one), or undefined outside the model. */
export function componentFinder(components: readonly ComponentRecord[]): (spelling: string) => ComponentId | undefined {
  const bySpelling = new Map<string, ComponentId>();
  for (const component of components) {
    for (const form of component.forms) bySpelling.set(form.spelling, component.id);
    bySpelling.set(component.ion, component.id);
  }
  for (const component of components) bySpelling.set(component.id, component.id); // an id always means itself
  return (spelling) => bySpelling.get(spelling);
}

/**
 * Practice data with every ion as the component id of the model. An ion outside the model keeps its spelling, and a gap remark
 * says how many rows of which kind name it; components named by buffers, agents and dyes that the model lacks become null
 * (dyes: no constants), each with a remark.
 */
export function resolveIons(
  practice: PracticeData,
  components: readonly ComponentRecord[],
): { readonly practice: PracticeData; readonly remarks: readonly DataRemark[] } {
  const find = componentFinder(components);
  const outside = new Map<string, Map<string, number>>();
  const gaps: DataRemark[] = [];
  const resolve = (kind: string) => (ion: string) => {
    const id = find(ion);
    if (id !== undefined) return id;
    const rows = outside.get(ion) ?? new Map<string, number>();
    outside.set(ion, rows.set(kind, (rows.get(kind) ?? 0) + 1));
    return ion;
  };
  const modelled = (owner: string, component: ComponentId | null) => {
    if (component === null || find(component) === component) return component;
    gaps.push({ kind: "gap", about: owner, text: `No constants in the model for ${component}: it is taken as inert.` });
    return null;
  };
  const dye = (id: ComponentId, claimed: boolean) => {
    const component = components.find((c) => c.id === dyeComponentOf(id));
    if (!claimed || component !== undefined) return claimed;
    gaps.push({ kind: "gap", about: id, text: "Constants of this dye are on record but are not in the model." });
    return false;
  };
  const [use, blocker, transition] = [resolve("indicator use"), resolve("blocker"), resolve("transition table")];
  const [mask, kinetic, conversion] = [resolve("masking"), resolve("kinetics"), resolve("conversion")];
  const [electrode, standard, fact] = [resolve("electrode"), resolve("standard"), resolve("ion fact")];
  const photometric = resolve("photometric wavelength");
  const [metal, precedent, detour] = [resolve("metal titrant"), resolve("precedent"), resolve("way round")];
  const separated = resolve("separation");
  const release = resolve("release");
  for (const titrant of practice.titrants) modelled(titrant.id, titrant.id);
  const resolved: PracticeData = {
    ...practice,
    indicators: practice.indicators.map((indicator) => ({
      ...indicator,
      hasConstants: dye(indicator.id, indicator.hasConstants),
      uses: indicator.uses.map((row) => ({
        ...row,
        ions: row.ions.map(use),
        ...(row.backTitrant === undefined ? {} : { backTitrant: use(row.backTitrant) }),
      })),
      blockers: indicator.blockers.map((row) => ({ ...row, ion: blocker(row.ion) })),
      transitions: indicator.transitions.map((row) => ({ ...row, ion: transition(row.ion) })),
    })),
    buffers: practice.buffers.map((row) => ({ ...row, component: modelled(row.id, row.component) })),
    agents: practice.agents.map((row) => ({
      ...row,
      component: modelled(row.id, row.component),
      converts: row.converts.map((c) => ({ ...c, from: conversion(c.from), to: conversion(c.to) })),
    })),
    masking: practice.masking.map((row) => ({ ...row, ion: mask(row.ion) })),
    kinetics: practice.kinetics.map((row) => ({ ...row, ion: kinetic(row.ion) })),
    releases: practice.releases.map((row) => ({
      ...row,
      ions: row.ions.map((i) => ({ ...i, ion: release(i.ion) })),
      backTitrants: row.backTitrants.map(release),
    })),
    electrodes: practice.electrodes.map((row) => ({
      ...row,
      ion: electrode(row.ion),
      shows: row.shows.map(electrode),
      couple: row.couple === null ? null : electrode(row.couple),
      interferingIons: row.interferingIons.map((i) => ({ ...i, ion: electrode(i.ion) })),
      uses: row.uses.map((u) => ({ ...u, ions: u.ions.map(electrode) })),
      poisons: row.poisons.map((p) => ({ ...p, component: electrode(p.component) })),
    })),
    photometric: practice.photometric.map((row) => ({
      ...row,
      complex: row.complex && { ...row.complex, metal: photometric(row.complex.metal) },
      bound: row.bound.map((b) => ({ ...b, ion: photometric(b.ion) })),
    })),
    standards: practice.standards.map((row) => ({ ...row, forIon: standard(row.forIon) })),
    metalTitrants: practice.metalTitrants.map((row) => ({ ...row, ion: metal(row.ion) })),
    detours: practice.detours.map((row) => ({ ...row, analyte: detour(row.analyte), metal: detour(row.metal) })),
    ionFacts: practice.ionFacts.map((row) => ({ ...row, ion: fact(row.ion) })),
    separations: practice.separations.map((row) => ({
      ...row,
      removes: row.removes.map(separated),
      takesAlong: row.takesAlong.map(separated),
    })),
    precedents: practice.precedents.map((row) => ({
      ...row,
      ion: precedent(row.ion),
      backTitrant: row.backTitrant === null ? null : precedent(row.backTitrant),
    })),
  };
  for (const [ion, rows] of [...outside].sort(([a], [b]) => (a < b ? -1 : 1))) {
    const where = [...rows].map(([kind, count]) => `${kind} ${count}`).join(", ");
    gaps.push({ kind: "gap", about: ion, text: `Outside the equilibrium model; named in practice rows: ${where}.` });
  }
  return { practice: resolved, remarks: gaps };
}

/** The dye that an indicator brings into the equilibrium: Cu-PAN is PAN with a little Cu-EDTA, the others are themselves. */
export function dyeComponentOf(indicator: ComponentId): ComponentId {
  return indicator === "Cu-PAN" ? "PAN" : indicator;
}
