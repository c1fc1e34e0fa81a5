import { describe, expect, it } from "vitest";
import { recommendationSchema } from "../../src/recommendation/contract.ts";
import { BAD_BRIEFS, GOOD_BRIEF } from "./bad-briefs.ts";
import { run, withFile } from "./command.ts";

describe("chelwright recommend with a brief that is not valid", () => {
  it.each(BAD_BRIEFS)(
    "gives one line for each fault of $what, exit code 2 and no answer",
    async ({ brief, faults }) => {
      const text = typeof brief === "string" ? brief : JSON.stringify(brief);
      const { code, out, lines } = await withFile(text, (path) => run(["recommend", path, "--json"]));
      expect(code).toBe(2);
      expect(out).toBe("");
      expect(lines).toHaveLength(faults.length);
      for (const fault of faults)
        expect(
          lines.filter((line) => fault.test(line)),
          lines.join("\n"),
        ).toHaveLength(1);
    },
  );
  it("is tried on at least 25 of them", () => {
    expect(BAD_BRIEFS.length).toBeGreaterThanOrEqual(25);
  });
});

describe("chelwright recommend with a file that cannot be read", () => {
  it("names a file that is not there", async () => {
    expect(await run(["recommend", "no-such-brief.json"])).toMatchObject({
      code: 2,
      out: "",
      err: "no-such-brief.json: expected a file that can be read, found no such file\n",
    });
  });
  it("names a folder", async () => {
    expect(await run(["recommend", "."])).toMatchObject({
      code: 2,
      out: "",
      err: ".: expected a file that can be read, found a folder\n",
    });
  });
  it("refuses bytes that are not UTF-8", async () => {
    const { code, err } = await withFile(Uint8Array.of(0x7b, 0xff, 0x7d), (path) => run(["recommend", path]));
    expect({ code, err }).toEqual({ code: 2, err: "$: expected a text in UTF-8, found bytes that are not\n" });
  });
});

describe("chelwright recommend with a good brief", () => {
  it("prints one document that keeps the contract, and nothing on standard error", async () => {
    const { code, out, err } = await withFile(JSON.stringify(GOOD_BRIEF), (path) => run(["recommend", path, "--json"]));
    expect({ code, err }).toEqual({ code: 0, err: "" });
    const document = recommendationSchema.parse(JSON.parse(out));
    expect(document.brief.analytes).toEqual([
      { ion: "Zn2+", concentration: { value: 0.005, unit: "mol/L" }, report: "individual" },
    ]);
    expect(document.knowledge.hash).toMatch(/^[0-9a-f]{16}/);
  });
  it("reads it from standard input too, and answers the same in words", async () => {
    const { code, out } = await run(["recommend", "-"], JSON.stringify(GOOD_BRIEF));
    expect(code).toBe(0);
    expect(out.split("\n")[0]).toBe(GOOD_BRIEF.title);
    expect(out).toMatch(/^(FIT|NOT FIT)/m);
  });
  it("gives the same bytes for the same brief", async () => {
    const once = await run(["recommend", "-", "--json"], JSON.stringify(GOOD_BRIEF));
    const again = await run(["recommend", "-", "--json"], JSON.stringify(GOOD_BRIEF));
    expect(again.out).toBe(once.out);
  });
});
