import { type ParseArgsConfig, parseArgs } from 'node:util';
import { nearestOf } from './nearest_word.js';
import { type ExitStatus, Fault, type Surroundings } from './surroundings.js';

type Options = NonNullable<ParseArgsConfig['options']>;
type Values = Record<string, string | boolean | undefined>;

interface Command {
  /** One line for the overview. */
  meaning: string;
  usage: string;
  options: Options;
  optionMeanings: Record<string, string>;
  run: (values: Values, positionals: string[], around: Surroundings) => Promise<ExitStatus>;
}

const buildOptions: Options = { image: { type: 'string' }, 'skip-build': { type: 'boolean' } };
const buildMeanings = {
  '--image PATH': 'judge this image instead of the one that the spec names',
  '--skip-build': 'take the image as it is, without running the build command',
};

/** Every command, in the order of the overview. Their code is loaded when they run. */
const commands: Record<string, Command> = {
  check: {
    meaning: 'judge specs against the build; the main job',
    usage: 'pawl check [SPEC…] [--image PATH] [--skip-build] [--out DIR] [--part 3 --of 8]',
    options: { ...buildOptions, out: { type: 'string' }, part: { type: 'string' }, of: { type: 'string' } },
    optionMeanings: {
      ...buildMeanings,
      '--out DIR': 'write junit.xml, run.json, report.html and summary.md into DIR',
      '--part N --of M': "measure one part's share of the plants, for 'pawl join'",
    },
    run: async (values, specs, around) => {
      const options = { ...buildChoice(values), specs, out: values.out as string | undefined };
      if (values.part !== undefined || values.of !== undefined) {
        const { checkPart } = await import('./check_part.js');
        return checkPart({ part: Number(values.part), of: Number(values.of) }, options, around);
      }
      const { check } = await import('./check.js');
      return check(options, around);
    },
  },
  join: {
    meaning: 'judge what the parts of a run have measured, as one machine would have',
    usage: 'pawl join PART… [--out DIR]',
    options: { out: { type: 'string' } },
    optionMeanings: { '--out DIR': 'write junit.xml, run.json, report.html and summary.md into DIR' },
    run: async (values, paths, around) => {
      const { join } = await import('./join.js');
      return join(paths, values.out as string | undefined, around);
    },
  },
  latch: {
    meaning: 'accept what the build gives as the reference for later changes',
    usage: 'pawl latch [SPEC…] --reason TEXT [--with-unjudged] [--image PATH] [--skip-build]',
    options: { ...buildOptions, reason: { type: 'string' }, 'with-unjudged': { type: 'boolean' } },
    optionMeanings: {
      '--reason TEXT': 'why, for those who read the change of the reference',
      '--with-unjudged': 'latch even what could not be judged',
      ...buildMeanings,
    },
    run: async (values, specs, around) => {
      const { latch } = await import('./latch.js');
      const reason = values.reason as string | undefined;
      const withUnjudged = values['with-unjudged'] === true;
      return latch({ ...buildChoice(values), specs, reason, withUnjudged }, around);
    },
  },
  read: {
    meaning: 'show the coefficients that a build really holds',
    usage: 'pawl read SPEC | IMAGE [PATH…] [--against IMAGE] [--json]',
    options: {
      ...buildOptions,
      against: { type: 'string' },
      symbols: { type: 'string' },
      json: { type: 'boolean' },
    },
    optionMeanings: {
      'PATH…': "symbol, members, indices: drive.gains.kp; '*' any name, '[*]' any index, '**' all below",
      '--against IMAGE': 'show what changed, was added or has vanished since that image',
      '--json': 'an array for programs, one entry for each number',
      '--symbols ELF': 'the ELF file of the same build, for an image without names',
      ...buildMeanings,
    },
    run: async (values, [source, ...paths], around) => {
      if (source === undefined) throw new Fault(["'pawl read' takes a spec or an image, but got nothing"]);
      const { read } = await import('./read.js');
      const { against, symbols } = values as Record<string, string | undefined>;
      const json = values.json === true;
      return read({ ...buildChoice(values), source, paths, against, symbols, json }, around);
    },
  },
  replay: {
    meaning: 'run the counterexample of one requirement again, alone',
    usage: 'pawl replay REPORT REQUIREMENT [--spec SPEC] [--build NAME] [--image PATH] [--out DIR] [--keep]',
    options: {
      spec: { type: 'string' },
      build: { type: 'string' },
      image: { type: 'string' },
      out: { type: 'string' },
      keep: { type: 'boolean' },
    },
    optionMeanings: {
      REPORT: 'the run.json of a check, or the folder that holds it',
      '--spec SPEC': 'the spec, where several in the report have a requirement of this name',
      '--build NAME': 'the build, where the spec has several',
      '--image PATH': 'another image than the one of the report',
      '--out DIR': 'write the traces into DIR instead of this folder',
      '--keep': 'save the counterexample: every later check tries it first',
    },
    run: async (values, positionals, around) => {
      if (positionals.length !== 2)
        throw new Fault([
          `'pawl replay' takes a report and a requirement, but got ${positionals.length} words`,
        ]);
      const { replay } = await import('./replay.js');
      const { spec, build, image, out } = values as Record<string, string | undefined>;
      const [report, requirement] = positionals;
      const keep = values.keep === true;
      return replay({ report, requirement, spec, build, image, out, keep }, around);
    },
  },
  start: {
    meaning: 'write a first spec for an image, which runs as it is',
    usage: 'pawl start IMAGE',
    options: {},
    optionMeanings: {},
    run: async (_, positionals, around) => {
      if (positionals.length !== 1)
        throw new Fault([`'pawl start' takes one image, but got ${positionals.length}`]);
      const { start } = await import('./start.js');
      return start(positionals[0], around);
    },
  },
  schema: {
    meaning: 'print the JSON Schema of specs, for editors',
    usage: 'pawl schema [--included]',
    options: { included: { type: 'boolean' } },
    optionMeanings: { '--included': 'that of the files which specs include' },
    run: async (values, positionals, around) => {
      if (positionals.length > 0)
        throw new Fault([`'pawl schema' takes nothing, but got '${positionals[0]}'`]);
      const { schema } = await import('./schema.js');
      return schema(values.included === true ? 'part' : 'spec', around);
    },
  },
};

function buildChoice(values: Values): { image: string | undefined; skipBuild: boolean } {
  return { image: values.image as string | undefined, skipBuild: values['skip-build'] === true };
}

/**
 * Runs one command line.
 * @throws {Fault} for a mistake in the command line or anything else a user can put right.
 */
export async function runCommand(words: readonly string[], around: Surroundings): Promise<ExitStatus> {
  const [name, ...rest] = words;
  if (name === undefined) throw new Fault([`no command was given\n${overview()}`]);
  if (name === '--help' || name === 'help') {
    around.print(`${overview()}\n`);
    return 0;
  }
  if (name === '--version') {
    const { version } = await import('./version.js');
    around.print(`${version}\n`);
    return 0;
  }
  const command = Object.hasOwn(commands, name) ? commands[name] : undefined;
  if (!command) throw new Fault([`there is no command '${name}'${nearestOf(name, Object.keys(commands))}`]);
  const { values, positionals } = parse(name, command, rest);
  if (values.help) {
    around.print(`${helpOf(command)}\n`);
    return 0;
  }
  return command.run(values, positionals, around);
}

function parse(name: string, command: Command, words: string[]): { values: Values; positionals: string[] } {
  const options: Options = { ...command.options, help: { type: 'boolean' } };
  try {
    const { values, positionals } = parseArgs({ args: words, options, allowPositionals: true, strict: true });
    return { values: values as Values, positionals };
  } catch (error) {
    const unknown = /Unknown option '(--?[^'=]+)/.exec((error as Error).message)?.[1];
    const hint = unknown
      ? nearestOf(
          unknown,
          Object.keys(options).map((option) => `--${option}`),
        )
      : '';
    const what = unknown ? `there is no option '${unknown}'` : (error as Error).message.split('. ')[0];
    throw new Fault([`pawl ${name}: ${what}${hint}; see 'pawl ${name} --help'`]);
  }
}

function overview(): string {
  const rows = Object.entries(commands).map(([name, { meaning }]) => `  pawl ${name.padEnd(8)}${meaning}`);
  return [
    'pawl: judges the feedback controller that a firmware build holds against written requirements',
    '',
    ...rows,
    '',
    'Exit status: 0 all requirements met; 1 one is broken, slipped or unjudged; 2 the run could not be made.',
    "'pawl COMMAND --help' tells more.",
  ].join('\n');
}

function helpOf({ meaning, usage, optionMeanings }: Command): string {
  const rows = Object.entries(optionMeanings).map(([option, text]) => `  ${option.padEnd(18)}${text}`);
  return [usage, '', meaning, '', ...rows].join('\n');
}
