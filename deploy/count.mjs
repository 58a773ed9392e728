// Counts checks in the output of test runners, for deploy/test: prints "passed failed". Reads
//   ctest    the output of `ctest -V`: doctest cases and "N passed, N failed" lines of each test program; a program
//            that prints neither counts as one check, and one that fails without a failed check adds a failed one
//   script   the "N passed, N failed" lines, one for each script that ran
//   node     the "# pass N" / "# fail N" lines of node --test (spec or TAP), or else as script
// Usage: node count.mjs ctest|script|node FILE. Exit 2 where nothing can be counted: no tests is no success.
import { readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';

const DOCTEST = /test cases:\s*\d+\s*\|\s*(\d+) passed\s*\|\s*(\d+) failed/;
const SCRIPT = /(?:^|\s)(\d+) passed, (\d+) failed\s*$/;
const withoutColour = (text) => text.replace(/\u001b\[[0-9;]*m/g, '');

export function countScript(text) {
  const lines = withoutColour(text).split('\n').map((line) => line.match(SCRIPT)).filter(Boolean);
  const sum = (group) => lines.reduce((total, line) => total + Number(line[group]), 0);
  return lines.length ? { passed: sum(1), failed: sum(2) } : null;
}

export function countNode(text) {
  const last = (word) => [...withoutColour(text).matchAll(new RegExp(`^\\s*(?:#|ℹ) ${word} (\\d+)\\s*$`, 'gm'))].at(-1);
  const [pass, fail] = [last('pass'), last('fail')];
  return pass && fail ? { passed: Number(pass[1]), failed: Number(fail[1]) } : countScript(text);
}

export function countCtest(text) {
  const programs = new Map(); // number -> {passed, failed, ok}
  const of = (number) => {
    if (!programs.has(number)) programs.set(number, { passed: 0, failed: 0, counted: false, ok: null });
    return programs.get(number);
  };
  for (const line of withoutColour(text).split('\n')) {
    const output = line.match(/^(\d+): (.*)$/);
    const found = output && (output[2].match(DOCTEST) ?? output[2].match(SCRIPT));
    if (found) {
      const program = of(output[1]);
      program.passed += Number(found[1]);
      program.failed += Number(found[2]);
      program.counted = true;
    }
    const end = line.match(/^\s*\d+\/\d+ Test\s+#(\d+): \S+ \.*\s*(Passed|\*\*\*\S.*|Not Run.*|.*Failed.*|.*Exception.*)/);
    if (end) of(end[1]).ok = end[2].startsWith('Passed');
  }
  if (programs.size === 0) return null;
  let [passed, failed] = [0, 0];
  for (const program of programs.values()) {
    passed += program.counted ? program.passed : Number(program.ok === true);
    failed += program.failed;
    if (program.ok !== true && program.failed === 0) failed++;
  }
  return { passed, failed };
}

if (process.argv[1] === fileURLToPath(import.meta.url)) {
  const [kind, file] = process.argv.slice(2);
  const count = { ctest: countCtest, script: countScript, node: countNode }[kind]?.(readFileSync(file, 'utf8'));
  if (!count || count.passed + count.failed === 0) process.exit(2);
  console.log(`${count.passed} ${count.failed}`);
}
