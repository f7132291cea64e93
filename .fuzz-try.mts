import { schemaLeaves, type Leaf } from '#tests/support/schema-leaves.ts'
import { planDesign } from '#shared/design/plan-design.ts'
import { readDesign, DesignRefused } from '#shared/design/read.ts'
const single = { format:'spandrel-design/1', name:'x', sensor:{kind:'voltage',quantity:{name:'Q',unit:'m',low:-1,high:1},output:{low:-0.35,high:0.35},sourceResistance:100,bandwidth:20},
 converter:{input:{low:0,high:2.5},bits:14,reference:{voltage:2.5,tolerance:0.001},sampleRate:1000,absolute:{low:-0.3,high:3.6}},rails:{positive:5,tolerance:0.02},parts:{resistors:{series:'E12'}}}
const diff = structuredClone(single) as any; diff.sensor.wiring='differential'; diff.sensor.output={low:0.002,high:0.03}; diff.sensor.commonMode={low:2.4,high:2.6}
const bridge = structuredClone(single) as any; bridge.sensor={kind:'bridge',quantity:{name:'Q',unit:'m',low:0,high:5},excitation:5,sensitivity:0.002,bandwidth:5}
const bases:any={single,diff,bridge}
const companions:Record<string,any>={ }
function setAt(doc:any,path:(string|number)[],v:unknown){let at=doc;path.forEach((k,i)=>{ if(i===path.length-1) at[k]=v; else { if(typeof at[k]!=='object'||at[k]===null) at[k]=typeof path[i+1]==='number'?[]:{}; at=at[k]} })}
const comp=(doc:any,p:string)=>{ const s=doc.sensor
 if(p.startsWith('sensor.temperature')) s.temperature={low:0,high:40,...s.temperature}
 if(p.startsWith('sensor.beyond')) s.beyond= s.kind==='bridge'?{low:-0.5,high:5.5,...s.beyond}:{low:s.output.low-0.05,high:s.output.high+0.05,...s.beyond}
 if(p.startsWith('sensor.commonMode')) s.commonMode={low:2.4,high:2.6,...s.commonMode}
 if(p.startsWith('sensor.fault')) s.fault={low:-30,high:30,...s.fault}
 if(p.startsWith('sensor.excitation.')&&typeof s.excitation!=='object') s.excitation={voltage:5}
 if(p.startsWith('sensor.excitation.')) s.excitation={voltage:5,...s.excitation}
 if(p.startsWith('converter.guard')) doc.converter.guard={low:0.02,high:0.02,...doc.converter.guard}
 if(p.startsWith('converter.commonMode')) doc.converter.commonMode={low:0,high:2.5,...doc.converter.commonMode}
 if(p.startsWith('shiftReference')) doc.shiftReference={voltage:2.5,...doc.shiftReference}
 if(p.startsWith('target')) doc.target={limit:0.01,...doc.target}
 if(p.startsWith('choose.stages')) doc.choose.stages=[{ref:'S1',...doc.choose.stages[0]}]
 if(p.startsWith('choose.filter')) doc.choose.filter={kind:'rc',...doc.choose.filter}
 for(const t of ['cmrr','psrr','bandwidth']) if(p.startsWith('parts.instrumentation.'+t)) { const a=doc.parts.instrumentation[t][0]; doc.parts.instrumentation[t]=[[a[0]??1,a[1]??80]] }
}
function values(l:Leaf):unknown[]{const r=l.rule; if(r.type==='choice')return [...r.values]; if(r.type==='text')return ['a','ä'.repeat(Math.min(r.most,60))]; if(r.type==='free')return [{a:[1,null]}];
 const eps=(x:number,d:number)=>d>0?(x===0?1e-15:x*(1+Math.sign(x)*1e-9)):(x===0?-1e-15:x*(1-Math.sign(x)*1e-9))
 const out=[r.above?eps(r.least,1):r.least, r.below?eps(r.most,-1):r.most]
 for(const m of [0,1e-12,1e-9,1e-6,1e-3,0.05,0.5,1,3,17,100,1e4,1e6,1e9,1e12]) for(const s of [1,-1]){const v=s*m; const w=r.integer?Math.round(v):v; if((r.above?w>r.least:w>=r.least)&&(r.below?w<r.most:w<=r.most)) out.push(w)}
 return [...new Set(out)]}
const bad=(v:unknown,p=''):string|null=>{ if(typeof v==='number') return Number.isFinite(v)?null:p; if(v===undefined) return p+' undefined'; if(v&&typeof v==='object') for(const [k,w] of Object.entries(v)){const b=bad(w,p+'.'+k); if(b) return b} return null }
const which=process.argv[2]!; const skip=/resistors\.(minimum|maximum)|capacitors\.(minimum|maximum)/
let n=0; const seen=new Set<string>(); let slow:any[]=[]
for(const l of schemaLeaves()){ const p=l.path.join('.'); if(skip.test(p)) continue
 if(l.kind && l.kind!==(bases[which] as any).sensor.kind) continue
 for(const v of values(l)){ const doc=structuredClone(bases[which]); setAt(doc,l.path,v); comp(doc,p); setAt(doc,l.path,v)
  const r=readDesign(doc); if(!r.ok) continue
  n++; const t=performance.now()
  try{ const plan=planDesign(doc); const b=bad(plan); if(b) throw new Error('not a number at '+b) }
  catch(e:any){ const key=p+' '+e.message; if(!seen.has(key)){seen.add(key); console.log('FAIL',which,p,'=',v,'::',e.constructor.name,e.message, (e.stack??'').split('\n').slice(1,4).map((x:string)=>x.trim().replace('/work/main/','')).join(' < '))} }
  const dt=performance.now()-t; if(dt>4000) console.log('SLOW',p,v,dt.toFixed(0))
 } }
console.log(which,'planned',n)
