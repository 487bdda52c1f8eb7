// Runs the chart library's expressions without `eval`: each is compiled once to nested closures.
// Calls reach the library's own function table and the short list below, nothing else.

/** A node of the chart library's expression tree (ESTree's shape). */
interface Node {
  readonly type: string;
  readonly name?: string; readonly value?: unknown; readonly operator?: string; readonly computed?: boolean;
  readonly regex?: { readonly pattern: string; readonly flags: string };
  readonly object?: Node; readonly property?: Node; readonly callee?: Node; readonly arguments?: readonly Node[];
  readonly elements?: readonly Node[]; readonly left?: Node; readonly right?: Node; readonly argument?: Node;
  readonly test?: Node; readonly consequent?: Node; readonly alternate?: Node;
  readonly properties?: readonly { readonly key: Node; readonly value: Node }[];
}

type Bag = Readonly<Record<string, unknown>>;
type Call = (...given: readonly unknown[]) => unknown;
/** `_` holds signals (`$name`) and scales (`%name`). */
type Run = (_: Bag, datum: unknown, event: unknown, item: unknown) => unknown;
interface Context { readonly functions: Bag }
interface Source { readonly ast: Node }
interface Item { [channel: string]: unknown }

const constants: Bag = {
  NaN: Number.NaN, E: Math.E, LN2: Math.LN2, LN10: Math.LN10, LOG2E: Math.LOG2E, LOG10E: Math.LOG10E, PI: Math.PI,
  SQRT1_2: Math.SQRT1_2, SQRT2: Math.SQRT2, MIN_VALUE: Number.MIN_VALUE, MAX_VALUE: Number.MAX_VALUE,
};

/** The expression runner to hand to a chart view (`expr`), for specifications parsed with `ast: true`. */
export const vegaExpression = {
  operator(context: Context, source: Source): (_: Bag) => unknown {
    const run = compile(source.ast, context);
    return (_) => run(_, undefined, undefined, undefined);
  },
  parameter(context: Context, source: Source): (datum: unknown, _: Bag) => unknown {
    const run = compile(source.ast, context);
    return (datum, _) => run(_, datum, undefined, undefined);
  },
  event(context: Context, source: Source): (event: unknown) => unknown {
    const run = compile(source.ast, context);
    return (event) => run({}, undefined, event, undefined);
  },
  handler(context: Context, source: Source): (_: Bag, event: unknown) => unknown {
    const run = compile(source.ast, context);
    return (_, event) => run(_, (event as { item?: { datum?: unknown } }).item?.datum, event, undefined);
  },
  encode(context: Context, encode: { readonly marktype: string; readonly channels: Readonly<Record<string, Source>> }): (item: Item, _: Bag) => number {
    const names = Object.keys(encode.channels);
    const runs = names.map((name) => compile(encode.channels[name].ast, context));
    const spans = encode.marktype === "rule" ? null : spanner(new Set(names), ["group", "image", "rect"].includes(encode.marktype));
    return (item, _) => {
      const datum = item.datum;
      let changed = 0;
      for (let i = 0; i < names.length; i++) {
        const value = runs[i](_, datum, undefined, item);
        if (item[names[i]] !== value) { item[names[i]] = value; changed = 1; }
      }
      spans?.(item);
      return changed;
    };
  },
};

/** Marks that span: x2 and xc, y2 and yc become x and width, y and height. Null when there is nothing to do. */
function spanner(has: ReadonlySet<string>, swaps: boolean): ((item: Item) => void) | null {
  const axis = (at: "x" | "y", size: "width" | "height"): ((item: Item) => void) | null => {
    const end = `${at}2`; const centre = `${at}c`;
    if (!has.has(end) && !has.has(centre)) return null;
    return (item) => {
      if (has.has(end)) {
        if (has.has(at)) {
          if (swaps && (item[at] as number) > (item[end] as number)) { const first = item[at]; item[at] = item[end]; item[end] = first; }
          item[size] = (item[end] as number) - (item[at] as number);
        } else item[at] = (item[end] as number) - ((item[size] as number) || 0);
      }
      if (has.has(centre)) item[at] = (item[centre] as number) - ((item[size] as number) || 0) / 2;
    };
  };
  const x = axis("x", "width"); const y = axis("y", "height");
  return x || y ? (item) => { x?.(item); y?.(item); } : null;
}

function compile(node: Node, context: Context): Run {
  const inner = (child: Node | undefined): Run => compile(child as Node, context);
  switch (node.type) {
    case "Literal": return literal(node);
    case "Identifier": return identifier(node.name as string);
    case "MemberExpression": return member(node, inner);
    case "CallExpression": return call(node, context, inner);
    case "ArrayExpression": { const parts = (node.elements ?? []).map(inner); return (_, d, e, i) => parts.map((run) => run(_, d, e, i)); }
    case "BinaryExpression": return binary(node.operator as string, inner(node.left), inner(node.right));
    case "UnaryExpression": return unary(node.operator as string, inner(node.argument));
    case "ConditionalExpression": return choose(inner(node.test), inner(node.consequent), inner(node.alternate));
    case "LogicalExpression": return logical(node.operator as string, inner(node.left), inner(node.right));
    case "ObjectExpression": return object(node, inner);
    default: throw new Error(`A chart's expression may not contain ${node.type}`);
  }
}

function literal(node: Node): Run {
  const { value, regex } = node;
  // A global or sticky pattern remembers where it stopped: each evaluation gets a fresh one.
  if (regex && /[gy]/.test(regex.flags)) return () => new RegExp(regex.pattern, regex.flags);
  return () => value;
}

function identifier(name: string): Run {
  if (name === "datum") return (_, datum) => datum;
  if (name === "event") return (_, _d, event) => event;
  if (name === "item") return (_, _d, _e, item) => item;
  if (Object.hasOwn(constants, name)) { const value = constants[name]; return () => value; }
  const key = `$${name}`;
  return (_) => _[key];
}

const closed: ReadonlySet<string> = new Set(["constructor", "__proto__", "prototype", "__defineGetter__", "__defineSetter__", "__lookupGetter__", "__lookupSetter__"]);

function member(node: Node, inner: (child: Node | undefined) => Run): Run {
  const of = inner(node.object);
  const fixed = !node.computed ? node.property?.name : node.property?.type === "Literal" ? String(node.property.value) : undefined;
  if (fixed !== undefined) {
    if (closed.has(fixed)) throw new Error(`A chart's expression may not read "${fixed}"`);
    return (_, d, e, i) => (of(_, d, e, i) as Bag)[fixed];
  }
  const at = inner(node.property);
  return (_, d, e, i) => {
    const key = at(_, d, e, i) as string;
    if (closed.has(String(key))) throw new Error(`A chart's expression may not read "${key}"`);
    return (of(_, d, e, i) as Bag)[key];
  };
}

const eventFunctions: ReadonlySet<string> = new Set(["view", "item", "group", "xy", "x", "y"]);

function call(node: Node, context: Context, inner: (child: Node | undefined) => Run): Run {
  const name = (node.callee as Node).name as string;
  const given = node.arguments ?? [];
  const args = given.map(inner);
  if (name === "if") return choose(args[0], args[1], args[2]);
  if (name.startsWith("_")) return scaled(name, given, args);
  if (eventFunctions.has(name)) return (_, d, e, i) => ((e as { vega: Record<string, Call> }).vega[name])(...args.map((run) => run(_, d, e, i)));
  const functions = context.functions;
  const own = find(functions, name);
  if (own !== null) {
    if (args.length === 1) return (_, d, e, i) => own.call(functions, args[0](_, d, e, i));
    return (_, d, e, i) => own.apply(functions, args.map((run) => run(_, d, e, i)));
  }
  const plain = Object.hasOwn(plainFunctions, name) ? plainFunctions[name] : null;
  if (plain === null) throw new Error(`A chart's expression calls ${name}, which is not a function of the chart library`);
  if (args.length === 1) return (_, d, e, i) => plain(args[0](_, d, e, i));
  return (_, d, e, i) => plain(...args.map((run) => run(_, d, e, i)));
}

/** A function of the library's own table; nothing that every object has. */
function find(functions: Bag, name: string): Call | null {
  for (let table: object | null = functions; table !== null && table !== Object.prototype; table = Object.getPrototypeOf(table) as object | null) {
    if (Object.hasOwn(table, name)) { const found = (table as Bag)[name]; return typeof found === "function" ? found as Call : null; }
  }
  return null;
}

type Scale = ((value: unknown) => unknown) & { readonly bandwidth?: () => number; range(): unknown };

/** `_scale`, `_range`, `_bandwidth`: what the mark encoders call, straight on the scale among the parameters. */
function scaled(name: string, given: readonly Node[], args: readonly Run[]): Run {
  const fixed = given[0].type === "Literal" ? `%${String(given[0].value)}` : null;
  const of: (_: Bag, d: unknown, e: unknown, i: unknown) => Scale | undefined = fixed !== null
    ? (_) => _[fixed] as Scale | undefined
    : (_, d, e, i) => _[`%${String(args[0](_, d, e, i))}`] as Scale | undefined;
  if (name === "_scale") { const value = args[1]; return (_, d, e, i) => of(_, d, e, i)?.(value(_, d, e, i)); }
  if (name === "_range") return (_, d, e, i) => of(_, d, e, i)?.range() ?? [];
  if (name === "_bandwidth") return (_, d, e, i) => of(_, d, e, i)?.bandwidth?.() ?? 0;
  throw new Error(`A chart's expression calls ${name}, which is not a function of the chart library`);
}

function choose(test: Run, yes: Run, no: Run): Run { return (_, d, e, i) => test(_, d, e, i) ? yes(_, d, e, i) : no(_, d, e, i); }

function logical(operator: string, left: Run, right: Run): Run {
  return operator === "&&" ? (_, d, e, i) => left(_, d, e, i) && right(_, d, e, i) : (_, d, e, i) => left(_, d, e, i) || right(_, d, e, i);
}

function object(node: Node, inner: (child: Node | undefined) => Run): Run {
  const pairs = (node.properties ?? []).map(({ key, value }) => {
    const name = key.type === "Literal" ? String(key.value) : key.name as string;
    if (closed.has(name)) throw new Error(`A chart's expression may not set "${name}"`);
    return { name, run: inner(value) };
  });
  return (_, d, e, i) => { const made: Item = {}; for (const { name, run } of pairs) made[name] = run(_, d, e, i); return made; };
}

function unary(operator: string, of: Run): Run {
  switch (operator) {
    case "-": return (_, d, e, i) => -(of(_, d, e, i) as number);
    case "+": return (_, d, e, i) => Number(of(_, d, e, i));
    case "!": return (_, d, e, i) => !of(_, d, e, i);
    case "~": return (_, d, e, i) => ~(of(_, d, e, i) as number);
    default: throw new Error(`A chart's expression may not use ${operator}`);
  }
}

function binary(operator: string, left: Run, right: Run): Run {
  const on = (work: (a: number, b: number) => unknown): Run => (_, d, e, i) => work(left(_, d, e, i) as number, right(_, d, e, i) as number);
  switch (operator) {
    case "+": return on((a, b) => a + b);
    case "-": return on((a, b) => a - b);
    case "*": return on((a, b) => a * b);
    case "/": return on((a, b) => a / b);
    case "%": return on((a, b) => a % b);
    case "<": return on((a, b) => a < b);
    case "<=": return on((a, b) => a <= b);
    case ">": return on((a, b) => a > b);
    case ">=": return on((a, b) => a >= b);
    case "===": return on((a, b) => a === b);
    case "!==": return on((a, b) => a !== b);
    // Loose comparison is what these expressions mean by == (null and undefined are alike).
    // oxlint-disable-next-line eqeqeq
    case "==": return on((a, b) => a == b);
    // oxlint-disable-next-line eqeqeq
    case "!=": return on((a, b) => a != b);
    case "&": return on((a, b) => a & b);
    case "|": return on((a, b) => a | b);
    case "^": return on((a, b) => a ^ b);
    case "<<": return on((a, b) => a << b);
    case ">>": return on((a, b) => a >> b);
    case ">>>": return on((a, b) => a >>> b);
    default: throw new Error(`A chart's expression may not use ${operator}`);
  }
}

const dated = (read: (date: Date) => number): Call => (value) => read(new Date(value as number));
const worded = (work: (text: string, ...rest: never[]) => unknown): Call => (value, ...rest) => work(String(value), ...rest as never[]);

/** Functions that the library's generated code writes out in place, and so are not in its table. */
const plainFunctions: Readonly<Record<string, Call>> = {
  ...Object.fromEntries(["abs", "acos", "asin", "atan", "atan2", "ceil", "cos", "exp", "floor", "hypot", "log", "max", "min", "pow", "round", "sin", "sqrt", "tan"]
    .map((name) => [name, (Math as unknown as Record<string, Call>)[name]])),
  isNaN: Number.isNaN as Call, isFinite: Number.isFinite as Call,
  clamp: (value, low, high) => Math.max(low as number, Math.min(high as number, value as number)),
  now: () => Date.now(), utc: Date.UTC as unknown as Call,
  datetime: (first, month = 0, day = 1, hour = 0, minute = 0, second = 0, ms = 0) => typeof first === "string"
    ? new Date(first) : new Date(first as number, month as number, day as number, hour as number, minute as number, second as number, ms as number),
  date: dated((d) => d.getDate()), day: dated((d) => d.getDay()), year: dated((d) => d.getFullYear()), month: dated((d) => d.getMonth()),
  hours: dated((d) => d.getHours()), minutes: dated((d) => d.getMinutes()), seconds: dated((d) => d.getSeconds()), milliseconds: dated((d) => d.getMilliseconds()),
  time: dated((d) => d.getTime()), timezoneoffset: dated((d) => d.getTimezoneOffset()),
  utcdate: dated((d) => d.getUTCDate()), utcday: dated((d) => d.getUTCDay()), utcyear: dated((d) => d.getUTCFullYear()), utcmonth: dated((d) => d.getUTCMonth()),
  utchours: dated((d) => d.getUTCHours()), utcminutes: dated((d) => d.getUTCMinutes()), utcseconds: dated((d) => d.getUTCSeconds()), utcmilliseconds: dated((d) => d.getUTCMilliseconds()),
  length: (list) => (list as { length: number }).length,
  parseFloat: Number.parseFloat as Call, parseInt: Number.parseInt as Call,
  upper: worded((text) => text.toUpperCase()), lower: worded((text) => text.toLowerCase()), trim: worded((text) => text.trim()),
  substring: worded((text, from: number, to?: number) => text.substring(from, to)), split: worded((text, by: string, limit?: number) => text.split(by, limit)),
  btoa: (text) => btoa(String(text)), atob: (text) => atob(String(text)), encodeURIComponent: (text) => encodeURIComponent(String(text)),
  regexp: (pattern, flags) => new RegExp(pattern as string, flags as string | undefined),
  test: (pattern, text) => new RegExp(pattern as string | RegExp).test(String(text)),
};
