#!/usr/bin/env node
import { supervised } from './supervisor.js';

process.exitCode = await supervised(process.argv.slice(2));
