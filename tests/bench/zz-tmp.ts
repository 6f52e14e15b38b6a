import { readFileSync } from 'node:fs'
import { simulateYield } from '../../shared/solver/yield/simulate.ts'
const d = JSON.parse(readFileSync('tests/vectors/examples/unipolar-18.design.json','utf8'))
for (const o of [{passes:1},{passes:2},{passes:2,effects:'learned' as const},{passes:4}]) { const a=performance.now(), c=process.cpuUsage().user; const r = simulateYield(d,{trials:100000,...o}); process.stdout.write((performance.now()-a).toFixed(0)+' ms '+((process.cpuUsage().user-c)/1e3).toFixed(0)+' cpu '+JSON.stringify(r.passes)+JSON.stringify(r.remainingLsb.quantiles.map(q=>q.lsb?.toFixed(2)))+'\n') }
