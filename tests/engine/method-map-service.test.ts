import { expect, test, vi } from "vitest";
import { loadKnowledge } from "../../src/constants/index.ts";
import { createMethodMap } from "../../src/engine/method-map-service.ts";
import { UnavailableError } from "../../src/engine/worker-pool.ts";
import type { IonMap, MethodMap } from "../../src/recommendation/contract.ts";
import { mapIons } from "../../src/recommendation/method-map.ts";
import { invented } from "../web/fixture/method-map.ts";

const knowledge = loadKnowledge();
const ions = mapIons(knowledge);
const answer = (ion: string): IonMap => ({ ...invented(knowledge)[0], ion });

test("the map asks for nothing before it is asked for, then for each ion once, and gives what is ready", async () => {
  const asked: string[] = [];
  let go: () => void = () => undefined;
  const gate = new Promise<void>((resolve) => (go = resolve));
  const map = createMethodMap(
    knowledge,
    async (ion) => {
      asked.push(ion);
      if (asked.length === 3) await gate;
      return answer(ion);
    },
    () => undefined,
  );
  expect(asked).toEqual([]);
  map();
  await vi.waitFor(() => expect(asked).toHaveLength(3));
  expect(map()).toMatchObject({ done: 2, total: ions.length });
  go();
  await vi.waitFor(() => expect(map().done).toBe(ions.length));
  expect(map().ions.map((i) => i.ion)).toEqual(ions);
  expect(asked).toEqual(ions);
});

test("an ion whose calculation fails is named and logged, and the others follow", async () => {
  const lines: string[] = [];
  const map = createMethodMap(
    knowledge,
    (ion) => (ion === "Zn2+" ? Promise.reject(new Error("invented")) : Promise.resolve(answer(ion))),
    (line) => lines.push(line),
  );
  await vi.waitFor(() => expect(map().done).toBe(ions.length));
  expect(map().failed.map((f) => f.ion)).toEqual(["Zn2+"]);
  expect(lines).toEqual(["method map, Zn2+: invented"]);
});

test("a server that stops ends the work without a word in the log", async () => {
  const lines: string[] = [];
  const ask = vi.fn(() => Promise.reject(new UnavailableError("closed", "the server is stopping")));
  const map: () => MethodMap = createMethodMap(knowledge, ask, (line) => lines.push(line));
  map();
  await new Promise((resolve) => setTimeout(resolve, 20));
  expect({ lines, done: map().done, asked: ask.mock.calls.length }).toEqual({ lines: [], done: 0, asked: 1 });
});
