import { build } from 'vite'
import { gzipSync, brotliCompressSync } from 'node:zlib'
const res = await build({ configFile: 'vite.config.ts', logLevel: 'error', resolve:{alias:[{find:/^react-router$/,replacement:process.cwd()+'/node_modules/react-router/dist/production/index.mjs'},{find:/^react-router\/dom$/,replacement:process.cwd()+'/node_modules/react-router/dist/production/dom-export.mjs'}]}, build: { write: false, minify: true }})
const out = res.output.filter(o=>o.type==='chunk')
const by = Object.fromEntries(out.map(o=>[o.fileName,o]))
const seen=new Set(); const walk=f=>{ if(seen.has(f))return; seen.add(f); for(const i of by[f].imports) walk(i)}
walk(out.find(o=>o.isEntry).fileName); walk(out.find(o=>(o.facadeModuleId||'').endsWith('routes/desk.tsx')).fileName)
let total=0
for(const f of [...seen].sort((a,b)=>by[b].code.length-by[a].code.length)){ const c=by[f]; const gz=gzipSync(c.code,{level:9}).length; total+=gz
 console.log(f,gz); const mods=Object.entries(c.modules).map(([k,m])=>[k.replace(/.*node_modules\//,'nm/').replace(/.*wt-8\//,''),m.renderedLength]).filter(m=>m[1]>400).sort((a,b)=>b[1]-a[1]).slice(0,gz>9000?40:6)
 console.log('   ',mods.map(m=>m.join(':')).join(' | ')) }
console.log(total, [...seen].reduce((n,f)=>n+brotliCompressSync(by[f].code).length,0))
