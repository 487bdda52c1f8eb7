import { describe, expect, it } from "vitest";
import { readArguments, readSetting } from "../../../runtime/host/arguments.ts";
import { usualLimits } from "../../../runtime/host/within.ts";

const refusal = (...argv: string[]): string => {
  try { readArguments(argv); } catch (error) { return error instanceof Error ? error.message : String(error); }
  throw new Error(`accepted: ${argv.join(" ")}`);
};

describe("the command line", () => {
  it("reads each command with its options", () => {
    expect(readArguments(["begin", "d.csv"])).toEqual({ command: "begin", file: "d.csv", out: null });
    expect(readArguments(["open", "n.md", "--port", "0"])).toEqual({ command: "open", file: "n.md", port: 0 });
    expect(readArguments(["verify", "--json", "n.md", "--set", "q=2", "--set", "sample=2015-01/2019-12", "--allow-code"])).toEqual({
      command: "verify", file: "n.md", json: true, accept: false, allowCode: true, settings: [{ name: "q", value: 2 }, { name: "sample", value: "2015-01/2019-12" }], limits: usualLimits,
    });
    expect(readArguments(["verify", "n.md", "--seconds", "2.5", "--megabytes", "300"])).toMatchObject({ limits: { seconds: 2.5, megabytes: 300 } });
    expect(readArguments(["page", "n.md", "--out", "x.html"])).toMatchObject({ command: "page", out: "x.html", settings: [] });
    expect(readArguments(["--help"])).toEqual({ command: "help" });
    expect(readArguments(["--version"])).toEqual({ command: "version" });
  });

  it("reads a setting as a JSON literal, else as a text", () => {
    expect(readSetting("q=2")).toEqual({ name: "q", value: 2 });
    expect(readSetting("on=true")).toEqual({ name: "on", value: true });
    expect(readSetting('how="2"')).toEqual({ name: "how", value: "2" });
    expect(readSetting("how=a=b")).toEqual({ name: "how", value: "a=b" });
    expect(() => readSetting("q")).toThrow(/NAME=VALUE/);
    expect(() => readSetting("=2")).toThrow(/NAME=VALUE/);
  });

  it("says what is wrong and what there is", () => {
    expect(refusal()).toMatch(/begin, open, verify or page/);
    expect(refusal("verfy", "n.md")).toMatch(/no command "verfy".*verify/);
    expect(refusal("verify")).toMatch(/lagbook verify NOTEBOOK\.md/);
    expect(refusal("verify", "a.md", "b.md")).toMatch(/"b\.md" is one too many/);
    expect(refusal("verify", "a.md", "--jsn")).toMatch(/no option --jsn/);
    expect(refusal("open", "a.md", "--json")).toMatch(/--json does not go with lagbook open.*--port/);
    expect(refusal("open", "a.md", "--port", "x")).toMatch(/0 to 65535/);
    for (const given of ["0", "-1", "x", "1e9", ""]) expect(refusal("verify", "a.md", `--seconds=${given}`)).toMatch(/--seconds.*give a number above 0/);
    expect(refusal("verify", "a.md", "--accept", "--set", "q=1")).toMatch(/--accept.*does not go with --set/s);
    expect(refusal("verify", "a.md", "--set")).toMatch(/--set/);
  });
});
