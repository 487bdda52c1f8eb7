import { describe, expect, it } from "vitest";
import { compactSvg } from "../../../runtime/page/compactSvg.ts";

const inside = (marks: string): string => compactSvg(`<svg xmlns="http://www.w3.org/2000/svg" class="marks" width="10" height="10" viewBox="0 0 10 10"><g fill="none"><g class="mark-x">${marks}</g></g></svg>`, {})
  .replace(/^<svg viewBox="0 0 10 10"><g fill="none">/, "").replace(/<\/g><\/svg>$/, "");
const square = 'd="M-1,-1h2v2h-2Z"', triangle = 'd="M0,-1L1,1L-1,1Z"';

describe("compactSvg", () => {
  it("leaves out what cannot be seen, and groups that hold nothing", () => {
    expect(inside(`<text opacity="0" fill="red">gone</text><path class="background" d="M0,0h5v5h-5Z"/><path d="" display="none"/><g><g></g></g><text fill="red" transform="translate(3.04,4)">here &amp; there</text>`))
      .toBe('<text x="3" y="4" fill="red">here &amp; there</text>');
  });

  it("keeps a turned text turned", () => {
    expect(inside('<text transform="translate(3,4) rotate(-90)">up</text>')).toBe('<text transform="translate(3,4) rotate(-90)">up</text>');
  });

  it("joins lines that look alike, and says once what all marks of a group share", () => {
    expect(inside('<line transform="translate(1,2)" x2="0" y2="4" stroke="red"/><line transform="translate(5,2)" x2="3" y2="0" stroke="red"/><line transform="translate(1,9)" x2="2" y2="0" stroke="red" stroke-dasharray="2,2"/>'))
      .toBe('<g stroke="red"><path d="M1 2v4M5 2h3"/><path d="M1 9h2" stroke-dasharray="2,2"/></g>');
  });

  it("joins filled shapes only where they are alike, since unlike ones cancel each other where they overlap", () => {
    expect(inside(`<path transform="translate(2,2)" ${square} fill="red"/><path transform="translate(3,3)" ${square} fill="red"/><path transform="translate(3,3)" ${triangle} fill="red"/>`))
      .toBe('<g fill="red"><path d="M1 1h2v2h-2zM2 2h2v2h-2z"/><path d="M3 2l1 2h-2z"/></g>');
  });

  it("joins nothing that shows through, since it darkens what lies under it", () => {
    expect(inside(`<path transform="translate(2,2)" ${square} fill="red" opacity="0.5"/><path transform="translate(3,3)" ${square} fill="red" opacity="0.5"/>`))
      .toBe('<g fill="red" fill-opacity="0.5"><path d="M1 1h2v2h-2z"/><path d="M2 2h2v2h-2z"/></g>');
  });

  it("takes a line's width from a shape that has no line, and leaves the density of one with both", () => {
    expect(inside(`<path ${square} fill="red" stroke-width="2"/>`)).toBe('<path d="M-1-1h2v2h-2z" fill="red"/>');
    expect(inside(`<path ${square} fill="red" stroke="blue" opacity="0.5"/>`)).toBe('<path d="M-1-1h2v2h-2z" fill="red" stroke="blue" opacity="0.5"/>');
  });

  it("takes a clipping shape as it stands", () => {
    const clip = '<defs><clipPath id="clip0"><rect x="0" y="0" width="5" height="5"/></clipPath></defs>';
    expect(inside(`${clip}<path clip-path="url(#clip0)" d="M0,0L1,1" stroke="red"/>`)).toBe(`${clip}<path d="M0 0l1 1" clip-path="url(#clip0)" stroke="red"/>`);
  });
});
