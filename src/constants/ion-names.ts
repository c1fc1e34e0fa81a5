import { nearestSpellings } from "./edit-distance.ts";
import { chargedReadings, foldSpelling, plainSpelling } from "./ion-spelling.ts";
import type { ComponentForm, ComponentRecord } from "./knowledge.ts";

/** What a spelling of an ion or ligand means. */
export type IonReading =
  | { readonly kind: "found"; readonly component: ComponentRecord; readonly form: ComponentForm }
  | { readonly kind: "ambiguous"; readonly readings: readonly string[] } // canonical spellings to choose from
  | { readonly kind: "unknown"; readonly nearest: readonly string[] }; // canonical spellings that look alike, best first

interface Entry {
  readonly component: ComponentRecord;
  readonly form: ComponentForm;
}

interface SpellingIndex {
  readonly exact: ReadonlyMap<string, readonly Entry[]>; // canonical spellings, as written
  readonly byCharge: ReadonlyMap<string, readonly Entry[]>; // "formula charge", as written
  readonly foldedByCharge: ReadonlyMap<string, readonly Entry[]>; // the same without case
  readonly symbols: ReadonlyMap<string, readonly Entry[]>; // synonyms, names, ids, as written
  readonly folded: ReadonlyMap<string, readonly Entry[]>; // the same and bare formulas, without case and spelling variants
  readonly canonical: ReadonlyMap<string, string>; // every folded spelling with its canonical one, for nearest
}

type Components = ReadonlyMap<string, ComponentRecord> | readonly ComponentRecord[];

const indexes = new WeakMap<object, SpellingIndex>();

/**
 * Reads a spelling of an ion or ligand ("SO42-", "SO4--", "Fe(III)", "Fe+3", "iron(III)", "calcium", "sulphate", "HCO3^-", superscripts, any case).
 * A canonical spelling always means itself ("VO2+" is vanadyl, "VO2^+" pervanadyl). A bare element with several oxidation states in the data is
 * ambiguous and offers them; what is not known offers the nearest spellings, at most three. Never throws.
 */
export function readIon(text: string, components: Components): IonReading {
  let index = indexes.get(components);
  if (index === undefined) {
    index = buildIndex(components);
    indexes.set(components, index);
  }
  const plain = plainSpelling(text);
  const folded = foldSpelling(plain);
  const charged = chargedReadings(plain);
  const attempts: readonly (() => readonly Entry[])[] = [
    () => index.exact.get(plain) ?? [],
    () => charged.flatMap(({ formula, charge }) => index.byCharge.get(`${formula} ${charge}`) ?? []),
    () => index.symbols.get(plain) ?? [],
    () => index.folded.get(folded) ?? [],
    () =>
      charged.flatMap(({ formula, charge }) => index.foldedByCharge.get(`${formula.toLowerCase()} ${charge}`) ?? []),
  ];
  for (const attempt of attempts) {
    const entries = distinct(attempt());
    if (entries.length === 1) return { kind: "found", ...entries[0]! };
    if (entries.length > 1) return { kind: "ambiguous", readings: entries.map(({ form }) => form.spelling) };
  }
  return { kind: "unknown", nearest: nearestSpellings(folded, index.canonical) };
}

function buildIndex(components: Components): SpellingIndex {
  const exact = new Map<string, Entry[]>();
  const byCharge = new Map<string, Entry[]>();
  const foldedByCharge = new Map<string, Entry[]>();
  const symbols = new Map<string, Entry[]>();
  const folded = new Map<string, Entry[]>();
  const canonical = new Map<string, string>();
  for (const component of components.values()) {
    const ion = component.forms.find((form) => form.spelling === component.ion) ?? component.forms[0];
    if (ion === undefined) continue;
    for (const form of component.forms) {
      const entry = { component, form };
      add(exact, form.spelling, entry);
      canonical.set(foldSpelling(form.spelling), form.spelling);
      const formula = bareFormula(form);
      if (form.charge !== 0) {
        add(byCharge, `${formula} ${form.charge}`, entry);
        add(foldedByCharge, `${formula.toLowerCase()} ${form.charge}`, entry);
      }
      // a formula without its charge is understood where it is not just an element ("SO4", not "Fe")
      if (!/^[A-Z][a-z]?$/.test(formula)) add(folded, foldSpelling(formula), entry);
    }
    for (const word of new Set([component.id, component.name, ...component.synonyms])) {
      const form = component.forms.find((f) => f.spelling === word) ?? formNamed(word, component) ?? ion;
      const entry = { component, form };
      add(symbols, word, entry);
      add(folded, foldSpelling(word), entry);
      canonical.set(foldSpelling(word), form.spelling);
    }
  }
  return { exact, byCharge, foldedByCharge, symbols, folded, canonical };
}

/** Names that say how many protons the form carries; other synonyms mean the component's usual ion. */
const NAMED_FORMS: Readonly<Record<string, string>> = {
  hydrogensulfate: "HSO4-",
  hydrogensulphate: "HSO4-",
  bisulfate: "HSO4-",
  bisulphate: "HSO4-",
  "sulfuric acid": "H2SO4",
  "sulphuric acid": "H2SO4",
  hydrogencarbonate: "HCO3-",
  "hydrogen carbonate": "HCO3-",
  bicarbonate: "HCO3-",
  "carbonic acid": "H2CO3",
  "carbon dioxide": "CO2",
  hydrogenphosphate: "HPO4^2-",
  "hydrogen phosphate": "HPO4^2-",
  dihydrogenphosphate: "H2PO4-",
  "dihydrogen phosphate": "H2PO4-",
  "phosphoric acid": "H3PO4",
  dichromate: "Cr2O7^2-",
  bichromate: "Cr2O7^2-",
  "chromic acid": "H2CrO4",
  "boric acid": "B(OH)3",
  tetraborate: "B4O7^2-",
  metaborate: "BO2-",
  ammonium: "NH4+",
  "hydrofluoric acid": "HF",
  bifluoride: "HF2-",
  "hydrogen cyanide": "HCN",
  "prussic acid": "HCN",
  "hydrochloric acid": "HCl",
  "nitric acid": "HNO3",
  "perchloric acid": "HClO4",
  "hydrogen sulfide": "H2S",
  "hydrogen sulphide": "H2S",
  hydrosulfide: "HS-",
  hydrogensulfide: "HS-",
  bisulfide: "HS-",
  hydrogensulfite: "HSO3-",
  bisulfite: "HSO3-",
  bisulphite: "HSO3-",
  metavanadate: "VO3-",
  vanadate: "VO3-",
  orthovanadate: "VO4^3-",
  zirconyl: "ZrO2+",
  "Ti(IV)": "Ti4+",
  "titanium(IV)": "Ti4+",
  antimonyl: "SbO+",
  hydroxide: "OH-",
  silica: "SiO2",
  "silicic acid": "Si(OH)4",
  "arsenic acid": "H3AsO4",
};

function formNamed(word: string, component: ComponentRecord): ComponentForm | undefined {
  const spelling = NAMED_FORMS[word];
  return spelling === undefined ? undefined : component.forms.find((form) => form.spelling === spelling);
}

function bareFormula(form: ComponentForm): string {
  return chargedReadings(form.spelling).find(({ charge }) => charge === form.charge)?.formula ?? form.spelling;
}

function distinct(entries: readonly Entry[]): readonly Entry[] {
  const seen = new Map<string, Entry>();
  for (const entry of entries) if (!seen.has(entry.component.id)) seen.set(entry.component.id, entry);
  return [...seen.values()];
}

function add(map: Map<string, Entry[]>, key: string, entry: Entry): void {
  const present = map.get(key);
  if (present === undefined) map.set(key, [entry]);
  else present.push(entry);
}
