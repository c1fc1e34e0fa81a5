import { expect, test } from "vitest";
import { briefSchema, recommendationSchema } from "../../src/recommendation/contract.ts";
import { openApiDocument } from "../../src/web/api/openapi.ts";
import { FIXTURE } from "./fixture/recommendation.ts";

interface Schema {
  readonly required?: readonly string[];
  readonly properties?: Readonly<Record<string, unknown>>;
}
const document = openApiDocument("1.2.3") as {
  readonly openapi: string;
  readonly paths: Readonly<
    Record<string, { readonly post: { readonly responses: Readonly<Record<string, unknown>> } }>
  >;
  readonly components: { readonly schemas: Readonly<Record<string, Schema>> };
};

test("the description is OpenAPI 3.1 and each reference in it leads to a schema", () => {
  expect(document.openapi).toBe("3.1.0");
  const references = [...JSON.stringify(document).matchAll(/"\$ref":"#\/components\/schemas\/([^"]+)"/g)];
  expect(references.length).toBeGreaterThan(10);
  for (const [, name] of references) expect(Object.keys(document.components.schemas)).toContain(name);
});

test("each door says what it answers when the question is faulty", () => {
  const questions = ["/api/recommendations", "/api/equilibrium", "/api/curve", "/api/limits"];
  const long = ["/api/turning-points", "/api/robustness"].flatMap((path) => [path, `${path}/{id}`]);
  expect(Object.keys(document.paths).sort()).toEqual([...questions, ...long, "/api/method-map"].sort());
  const begun = Object.keys(document.paths["/api/turning-points"]?.post.responses ?? {});
  expect(begun).toEqual(["200", "202", "400", "413", "422", "500", "503"]);
  for (const path of questions)
    expect(Object.keys(document.paths[path]?.post.responses ?? {})).toEqual(["200", "400", "413", "422", "500", "503"]);
});

test("the schemas are those that check the data", () => {
  expect(Object.keys(document.components.schemas["Brief"]?.properties ?? {})).toEqual(Object.keys(briefSchema.shape));
  expect(document.components.schemas["Brief"]?.required).toEqual(["title", "analytes"]);
  expect(document.components.schemas["Recommendation"]?.required).toEqual(Object.keys(recommendationSchema.shape));
  expect(Object.keys(FIXTURE)).toEqual(Object.keys(recommendationSchema.shape));
});
