import { spawn } from 'node:child_process';

/** Commands that run now, so that a stop in the middle of a long step reaches them. */
const running = new Set();

/** How much of a command's output is kept to explain a failure. */
const KEEP_CHARS = 200_000;

/**
 * @typedef {object} CommandOptions
 * @property {NodeJS.ProcessEnv} [env] the whole environment of the command
 * @property {string} [cwd]
 * @property {string} [input] text for its standard input
 * @property {boolean} [showErrors] whether what it writes on stderr is shown as it comes; both outputs are kept
 *
 * @typedef {{ code: number, stdout: string, stderr: string }} CommandResult
 */

/**
 * Runs a command to its end. Never throws for a bad exit: the caller knows the right sentence.
 * @param {string[]} command program and arguments
 * @param {CommandOptions} [options]
 * @returns {Promise<CommandResult>} code 127 when the program can't be started
 */
export function runCommand([program, ...args], { env, cwd, input, showErrors = false } = {}) {
  return new Promise((resolve) => {
    const child = spawn(program, args, { env: env ?? process.env, cwd, stdio: 'pipe' });
    running.add(child);
    const kept = { stdout: '', stderr: '' };
    for (const name of /** @type {const} */ (['stdout', 'stderr']))
      child[name].setEncoding('utf8').on('data', (/** @type {string} */ text) => {
        kept[name] = (kept[name] + text).slice(-KEEP_CHARS);
        if (showErrors && name === 'stderr') process.stderr.write(text);
      });
    // A program that ends without reading its input is no fault of the writer.
    child.stdin.on('error', () => {});
    child.stdin.end(input ?? '');
    child.on('error', (error) => {
      running.delete(child);
      resolve({ code: 127, ...kept, stderr: `${kept.stderr}${error.message}\n` });
    });
    child.on('close', (code, signal) => {
      running.delete(child);
      resolve({ code: code ?? (signal ? 130 : 1), ...kept });
    });
  });
}

/** Ends the commands that run now. */
export function endCommands() {
  for (const child of running) child.kill('SIGTERM');
}

/**
 * The last lines of what a command wrote, for a message about its failure.
 * @param {CommandResult} result
 * @param {number} [lines]
 */
export const tailOf = ({ stdout, stderr }, lines = 15) =>
  `${stdout}\n${stderr}`
    .split('\n')
    .filter((line) => line.trim())
    .slice(-lines)
    .map((line) => `  ${line}`)
    .join('\n');
