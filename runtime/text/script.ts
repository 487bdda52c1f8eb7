// What a `script` cell's ECMAScript exports and reads.

import { childrenOf, moduleTree } from "./acorn.ts";
import type { AnyNode, Pattern } from "./acorn.ts";

export interface ScriptFault { readonly code: string; readonly message: string; readonly from: number; readonly to: number }
export interface ParsedScript { readonly exports: readonly string[]; readonly reads: readonly string[]; readonly faults: readonly ScriptFault[] }

/** Parses a module's source: exported names, names read that it does not bind, and refusal of anything that reaches outside. Never throws.
 *  Names are taken as bound if they are declared anywhere in an enclosing function or block, as ECMAScript hoists them. */
export function parseScript(source: string): ParsedScript {
  const parsed = moduleTree(source);
  if ("fault" in parsed) {
    const at = Math.min(parsed.fault.at, source.length);
    return { exports: [], reads: [], faults: [{ code: "syntax", message: `The script cannot be read: ${parsed.fault.message}`, from: at, to: Math.min(source.length, at + 1) }] };
  }
  const exports: string[] = [];
  const faults: ScriptFault[] = [];
  for (const node of parsed.tree.body) {
    if (node.type === "ImportDeclaration" || node.type === "ExportAllDeclaration" || (node.type === "ExportNamedDeclaration" && node.source)) {
      faults.push({ code: "import", message: "A script cannot import: it runs by itself, with the names that it reads from other cells", from: node.start, to: node.end });
    } else if (node.type === "ExportDefaultDeclaration") {
      faults.push({ code: "default-export", message: "An export needs a name here: write `export const name = …`", from: node.start, to: node.end });
    } else if (node.type === "ExportNamedDeclaration") {
      if (node.declaration) declared(node.declaration, exports);
      for (const each of node.specifiers) exports.push(each.exported.type === "Identifier" ? each.exported.name : String(each.exported.value));
    }
  }
  const reads = new Set<string>();
  visit(parsed.tree, [], reads, faults);
  return { exports, reads: [...reads], faults };
}

/** Scopes are lists of names, the innermost last. */
function visit(node: AnyNode, scopes: readonly ReadonlySet<string>[], reads: Set<string>, faults: ScriptFault[]): void {
  switch (node.type) {
    case "Identifier":
      if (!scopes.some((scope) => scope.has(node.name))) reads.add(node.name);
      return;
    case "ImportExpression":
      faults.push({ code: "import", message: "A script cannot import: it runs by itself, with the names that it reads from other cells", from: node.start, to: node.end });
      return;
    case "MetaProperty":
      if (node.meta.name === "import") faults.push({ code: "import", message: "`import.meta` is not available in a script", from: node.start, to: node.end });
      return;
    case "MemberExpression":
      visit(node.object as AnyNode, scopes, reads, faults);
      if (node.computed) visit(node.property as AnyNode, scopes, reads, faults);
      return;
    case "Property": case "PropertyDefinition": case "MethodDefinition":
      if (node.computed) visit(node.key as AnyNode, scopes, reads, faults);
      if (node.value) visit(node.value as AnyNode, scopes, reads, faults);
      return;
    case "LabeledStatement": return visit(node.body, scopes, reads, faults);
    case "BreakStatement": case "ContinueStatement": case "ExportSpecifier": case "ImportDeclaration": return;
    case "ExportNamedDeclaration":
      if (node.declaration) visit(node.declaration, scopes, reads, faults);
      else if (!node.source) for (const each of node.specifiers) visit(each.local as AnyNode, scopes, reads, faults);
      return;
    default: break;
  }
  const scope = new Set<string>();
  collect(node, scope);
  const inner = scope.size > 0 ? [...scopes, scope] : scopes;
  for (const child of childrenOf(node)) visit(child, inner, reads, faults);
}

/** Names that a node brings into being for what is inside it. */
function collect(node: AnyNode, scope: Set<string>): void {
  const names: string[] = [];
  switch (node.type) {
    case "Program": case "BlockStatement": case "StaticBlock":
      for (const each of node.body) statement(each as AnyNode, names);
      if (node.type === "Program") hoisted(node, names);
      break;
    case "SwitchStatement": for (const one of node.cases) for (const each of one.consequent) statement(each, names); break;
    case "FunctionDeclaration": case "FunctionExpression": case "ArrowFunctionExpression":
      for (const each of node.params) patternNames(each, names);
      if (node.id) names.push(node.id.name);
      if (node.type !== "ArrowFunctionExpression") names.push("arguments");
      hoisted(node.body, names);
      break;
    case "ClassDeclaration": case "ClassExpression": if (node.id) names.push(node.id.name); break;
    case "ForStatement": if (node.init?.type === "VariableDeclaration") statement(node.init, names); break;
    case "ForInStatement": case "ForOfStatement": if (node.left.type === "VariableDeclaration") statement(node.left, names); break;
    case "CatchClause": if (node.param) patternNames(node.param, names); break;
    default: return;
  }
  for (const name of names) scope.add(name);
}

function statement(node: AnyNode, names: string[]): void {
  if (node.type === "ExportNamedDeclaration" && node.declaration) declared(node.declaration, names);
  else if (node.type === "ExportDefaultDeclaration") statement(node.declaration as AnyNode, names);
  else declared(node, names);
}

function declared(node: AnyNode, names: string[]): void {
  if (node.type === "VariableDeclaration") for (const each of node.declarations) patternNames(each.id, names);
  else if ((node.type === "FunctionDeclaration" || node.type === "ClassDeclaration") && node.id) names.push(node.id.name);
}

/** `var` declarations at any depth outside inner functions. */
function hoisted(node: AnyNode, names: string[]): void {
  if (node.type === "VariableDeclaration" && node.kind === "var") declared(node, names);
  for (const child of childrenOf(node)) {
    if (child.type !== "FunctionDeclaration" && child.type !== "FunctionExpression" && child.type !== "ArrowFunctionExpression") hoisted(child, names);
  }
}

function patternNames(pattern: Pattern, names: string[]): void {
  switch (pattern.type) {
    case "Identifier": names.push(pattern.name); return;
    case "RestElement": return patternNames(pattern.argument, names);
    case "AssignmentPattern": return patternNames(pattern.left, names);
    case "ArrayPattern": for (const each of pattern.elements) if (each !== null) patternNames(each, names); return;
    case "ObjectPattern": for (const each of pattern.properties) patternNames(each.type === "RestElement" ? each.argument : each.value, names); return;
    default: return;
  }
}
