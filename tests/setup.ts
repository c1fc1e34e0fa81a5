import { afterEach, expect, vi } from "vitest";

// A test run that prints is a test run that hides something: console output fails the test that made it.
const spies = (["log", "warn", "error", "info"] as const).map((name) => vi.spyOn(console, name));

afterEach(() => {
  const printed = spies.flatMap((spy) => spy.mock.calls.map((call) => call.join(" ")));
  spies.forEach((spy) => spy.mockClear());
  expect(printed, "nothing is printed during a test").toEqual([]);
});
