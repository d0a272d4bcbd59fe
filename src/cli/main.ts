#!/usr/bin/env node
import { machine } from './machine.js';
import { run } from './run.js';

process.exitCode = await run(process.argv.slice(2), machine());
