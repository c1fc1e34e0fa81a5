/** A number of a brief that can be changed, and how far. */
export interface Variable {
  readonly from: number;
  readonly lowest: number; // above 0
  readonly highest: number;
}

/** How a search along one number ended. */
export type Seek =
  | { readonly kind: "turns"; readonly to: number; readonly unchangedAt: readonly number[] }
  | { readonly kind: "nothing"; readonly upTo: number }
  | { readonly kind: "unsettled"; readonly upTo: number };

/** First looks, as factors of what the brief says; near ones first, since the smallest change is asked for. */
const FIRST_FACTORS = [1.25, 2, 5, 20, 100];
/** First looks from nothing, mol/L: from a trace to a bulk component. */
const FROM_NOTHING = [1e-6, 1e-5, 1e-4, 1e-3, 1e-2, 0.1];
/** The place that turns and the nearest that does not are brought to this ratio. */
const RATIO = 1.05;
/** This part of the change must leave everything as it is. */
const PART = 0.9;
/** More looks than this along one number are not worth their time. */
const MOST_LOOKS = 40;

/** Figures that a brief can be given and that are printed in full. */
const rounded = (x: number): number => Number(x.toPrecision(6));

/**
 * The smallest change of one number, up or down, that turns an answer: by widening steps until it turns, then by halving the logarithm of the
 * bracket, until the place that turns is known to 5 % and nine tenths of the change (of its difference, and of its logarithm) have been seen to
 * change nothing. Where the answer turns, turns back and turns again within a step, the place found is one of them.
 * @param turns whether the answer at this number is another than the present one; its rejection ends the search
 */
export async function seekTurning(
  { from, lowest, highest }: Variable,
  direction: "up" | "down",
  turns: (x: number) => Promise<boolean>,
): Promise<Seek> {
  const looked = new Map<number, boolean>();
  const look = async (x: number): Promise<boolean> => {
    const known = looked.get(x);
    if (known !== undefined) return known;
    const answer = await turns(x);
    looked.set(x, answer);
    return answer;
  };
  const bracket = await firstTurn(firstPlaces(from, direction, lowest, highest), look, from);
  if (bracket.turned === null) return { kind: "nothing", upTo: bracket.still };
  let { still, turned } = bracket as { still: number; turned: number };
  while (looked.size < MOST_LOOKS) {
    const parts = partsOf(from, turned);
    const near =
      still > 0 &&
      Math.abs(Math.log(turned / still)) <= Math.log(RATIO) &&
      Math.abs(turned - still) <= 1.2 * (1 - PART) * Math.abs(turned - from);
    const open = parts.filter((x) => looked.get(x) !== false);
    if (near && open.length === 0) return { kind: "turns", to: turned, unchangedAt: parts };
    const x = near ? open[0]! : rounded(still > 0 ? Math.sqrt(still * turned) : turned / 3);
    if (x === turned || (x === still && !near)) break; // nearer than the figures of a brief can say
    if (await look(x)) turned = x;
    // A part of the change that lies before `still` confirms it; one beyond moves it.
    else if (Math.abs(x - from) > Math.abs(still - from)) still = x;
    // Where an earlier place turns after all, the bracket is opened again towards the start.
    if (Math.abs(turned - from) <= Math.abs(still - from)) still = nearestStill(looked, from, turned);
  }
  return { kind: "unsettled", upTo: turned };
}

/** Nine tenths of a change, by difference and by ratio; the later of the two first. */
function partsOf(from: number, to: number): number[] {
  const byDifference = rounded(from + PART * (to - from));
  if (!(from > 0)) return [byDifference];
  const byRatio = rounded(from * (to / from) ** PART);
  return [...new Set([byDifference, byRatio])].sort((a, b) => Math.abs(b - from) - Math.abs(a - from));
}

/** The place furthest from the start, before `turned`, that was seen to change nothing; the start itself where there is none. */
function nearestStill(looked: ReadonlyMap<number, boolean>, from: number, turned: number): number {
  return [...looked]
    .filter(([x, turns]) => !turns && Math.abs(x - from) < Math.abs(turned - from))
    .reduce((best, [x]) => (Math.abs(x - from) > Math.abs(best - from) ? x : best), from);
}

function firstPlaces(from: number, direction: "up" | "down", lowest: number, highest: number): number[] {
  const places =
    from > 0
      ? FIRST_FACTORS.map((f) => rounded(direction === "up" ? from * f : from / f))
      : direction === "up"
        ? FROM_NOTHING
        : [];
  const inside = places.filter((x) => (direction === "up" ? x <= highest : x >= lowest));
  const end = direction === "up" ? highest : lowest;
  // Where the steps run into the end of what a brief may say, the end itself is looked at too.
  const beyond = inside.length < places.length && (direction === "up" ? end > from : end < from);
  return beyond ? [...inside, end] : inside;
}

async function firstTurn(
  places: readonly number[],
  look: (x: number) => Promise<boolean>,
  from: number,
): Promise<{ readonly still: number; readonly turned: number | null }> {
  let still = from;
  for (const x of places) {
    if (await look(x)) return { still, turned: x };
    still = x;
  }
  return { still, turned: null };
}
