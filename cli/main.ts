#!/usr/bin/env node
import { run } from './run.js';
import { nodeTerminal } from './terminal.js';

process.exitCode = await run(process.argv.slice(2), nodeTerminal());
