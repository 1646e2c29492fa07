import { chromium } from "playwright-core";
const [url, out, width, scheme, mode] = process.argv.slice(2);
const b = await chromium.launch({ executablePath: "/usr/bin/chromium", args:["--no-sandbox"] });
const p = await b.newPage({ viewport:{width:+width,height:900}, colorScheme: scheme });
const errs=[]; p.on("console",m=>{if(m.type()==="error")errs.push(m.text())}); p.on("pageerror",e=>errs.push(String(e)));
const t0=performance.now(); await p.goto(url,{waitUntil:"load"}); const t1=performance.now();
if(mode==="pdf"){ await p.pdf({path:out,format:"A4",printBackground:true}); }
else { const h=await p.evaluate(()=>document.documentElement.scrollHeight); 
 const w=await p.evaluate(()=>document.documentElement.scrollWidth);
 console.log({load:Math.round(t1-t0),h,w,errs});
 await p.setViewportSize({width:+width,height:Math.min(h,60000)});
 const step=+(mode||2600); for(let y=0,i=0;y<h;y+=step,i++) await p.screenshot({path:out.replace("%",String(i).padStart(2,"0")),clip:{x:0,y,width:+width,height:Math.min(step,h-y)}}); }
await b.close();
