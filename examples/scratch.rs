use std::sync::Arc; use crestfall::diagnostic::*; use crestfall::input::*; use crestfall::spine::*;
use nalgebra::Vector3;
fn place()->Place{Place{source:Arc::new(Source{name:"t".into(),text:String::new()}),span:0..0}}
fn truth(u:f64)->[Vector3<f64>;3]{
 let (a,k,b,m)=(8.0,0.16,6.0,0.11);
 [Vector3::new(u,a*(k*u).sin(),b*(m*u+1.0).cos()),Vector3::new(1.0,a*k*(k*u).cos(),-b*m*(m*u+1.0).sin()),Vector3::new(0.0,-a*k*k*(k*u).sin(),-b*m*m*(m*u+1.0).cos())]}
fn kvec(r1:Vector3<f64>,r2:Vector3<f64>)->Vector3<f64>{let n=r1.norm();let t=r1/n; (r2-t*t.dot(&r2))/(n*n)}
struct Rng(u64); impl Rng{fn u(&mut self)->f64{self.0^=self.0<<13;self.0^=self.0>>7;self.0^=self.0<<17;(self.0>>11) as f64/(1u64<<53) as f64} fn g(&mut self)->f64{let (a,b)=(self.u().max(1e-300),self.u());(-2.0*a.ln()).sqrt()*(std::f64::consts::TAU*b).cos()}}
fn main(){
 let umax=330.0;
 let reps:u64=std::env::args().nth(1).map_or(10,|s|s.parse().unwrap());
 for h in [0.1,0.25,0.5,1.0]{ for (name,kind) in [("1mm",0.001),("1cm",0.01),("gauss2mm",-0.002)] {
  let mut acc=vec![vec![];4]; let mut meth=std::collections::BTreeMap::new();
  for rep in 0..reps {
   let mut rng=Rng(88172645463325252^(rep*7919+1));
   let mut us=vec![0.05*rng.u()]; loop{let u=*us.last().unwrap();let du=h/truth(u)[1].norm();let um=u+du/2.0;let n=u+h/truth(um)[1].norm();if n>umax{break;}us.push(n);}
   let n=us.len();
   let y:Vec<Vector3<f64>>=us.iter().map(|&u|{let r=truth(u)[0];let f=|x:f64,rng:&mut Rng| if kind>0.0{(x/kind).round()*kind}else{x-kind*rng.g()};Vector3::new(f(r.x,&mut rng),f(r.y,&mut rng),f(r.z,&mut rng))}).collect();
   let sigma=if kind>0.0{kind/12f64.sqrt()}else{-kind};
   for (j,(fit,grid)) in [(Fit::Within{error_m:sigma,bank_error_rad:None},None),(Fit::Auto,if kind>0.0{Some(kind)}else{Some(1e-4)}),(Fit::Auto,None)].into_iter().enumerate(){
     let mut table=PointTable::new(Columns::Bank{centre_m:y.clone(),bank_left_rad:vec![0.0;n]},false,fit,place());
     table.grids.position_m=grid; table.grids.attitude=Some(1e-12);
     let tr=Track{name:"t".into(),source:TrackSource::Points(table),landmarks:vec![],place:place()};
     let sp=match Spine::from_track(&tr){Ok(s)=>s,Err(e)=>{println!("{name} {h} {j} {:?}",e[0].message);continue;}};
     let rp=sp.fit().unwrap(); *meth.entry((j,format!("{:?}",rp.method))).or_insert(0)+=1;
     let f=25.0f64.powi(2)/9.80665; let l=sp.length_m();
     let (mut worst,mut ss,mut cnt,mut cover,mut band)=(0f64,0.0,0.0,0.0,0.0);let (mut ecov,mut ecnt,mut ess,mut eband)=(0.0,0.0,0.0,0.0);
     // march stations at half the spacing; nearest truth by newton
     let mut u=us[0]; let steps=(l/(h*0.5)) as usize;
     for i in 0..=steps { let s=i as f64*h*0.5; let p=sp.at(s); for _ in 0..6{let [r,r1,_]=truth(u);u+=(p.position_m-r).dot(&r1)/r1.norm_squared();}
       let [_,t1,t2]=truth(u);let kt=kvec(t1,t2).norm(); let e=f*(p.curvature_1_m()-kt); let bd=f*sp.margin_at(s).bend_1_m;
       let interior=s>5.0f64.max(8.0*h)&&s<l-5.0f64.max(8.0*h);
       if interior{worst=worst.max(e.abs());ss+=e*e;cnt+=1.0;if e.abs()<=bd{cover+=1.0;}band+=bd;}else{ecnt+=1.0;if e.abs()<=bd{ecov+=1.0;}ess+=e*e;eband+=bd;}}
     acc[j].push([worst,(ss/cnt).sqrt(),cover/cnt,band/cnt,ecov/ecnt,(ess/ecnt).sqrt(),eband/ecnt,rp.error_m.unwrap_or(0.0)/sigma]);
   }}
  for j in 0..3{ let k=acc[j].len() as f64; let m:Vec<f64>=(0..8).map(|c|acc[j].iter().map(|a|a[c]).sum::<f64>()/k).collect(); let w=acc[j].iter().map(|a|a[0]).fold(0.0,f64::max);
   println!("h={h} {name:9} fit{j} worst {w:.4} rms {:.4} cov {:.4} band/rms {:.2} | end cov {:.3} rms {:.3} band/rms {:.2} | err ratio {:.3}",m[1],m[2],m[3]/m[1],m[4],m[5],m[6]/m[5],m[7]);}
  println!("{meth:?}");
 }}
}
