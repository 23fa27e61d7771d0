# Cuts the two tables from the open, simulated assay, and works the known answers out with exact fractions.
# precision_lcms.csv was given CRLF line ends afterwards.
import csv,json,collections,datetime
from fractions import Fraction as F
import math
from decimal import Decimal,getcontext
getcontext().prec=40
src='lcms-drug/' # data/messy of pcmathias/MSACL-intermediate-R-course, commit dbdf7e4 (CC0)
when={}
for r in csv.DictReader(open(src+'2017-01-06-batch-messy.csv')):
    when[r['batch_name']]=r['batch_collected_timestamp']
qc=collections.defaultdict(list)
for r in csv.DictReader(open(src+'2017-01-06-sample-messy.csv')):
    if r['sample_type']=='qc': qc[r['batch_name']].append(r)
order=sorted(qc,key=lambda b:(when[b],b))
nominal=[40,250,400]
def sqrt(f): return float((Decimal(f.numerator)/Decimal(f.denominator)).sqrt())
with open('controls_lcms.csv','w',newline='') as o:
    o.write('batch,measured,analyte,level,nominal [ng/mL],found [ng/mL]\n')
    n=0
    use=order[:60]
    for b in use:
        assert len(qc[b])==3
        for a in ('morphine','codeine'):
            for i,r in enumerate(qc[b]):
                o.write(f"{b},{when[b].replace(' ','T')}Z,{a},qc{i+1},{nominal[i]},{r[a]}\n")
exp={'controls':{},'precision':{}}
for a in ('morphine','codeine'):
    for i in range(3):
        v=[F(qc[b][i][a]) for b in use]; m=sum(v)/len(v); s2=sum((x-m)**2 for x in v)/(len(v)-1)
        exp['controls'][f'{a} qc{i+1}']={'n':len(v),'mean':float(m),'sd':sqrt(s2)}
days=collections.defaultdict(list)
for b in order: days[when[b][:10]].append(b)
with open('precision_lcms.csv','w',newline='') as o:
    o.write('kind;run;level;replicate;nominal [ug/L];found [ug/L]\n')
    dd=sorted(days)[:8]
    for d in dd:
        for i in range(3):
            for b in days[d]:
                o.write(f"precision;{d};qc{i+1};{b};{nominal[i]};{qc[b][i]['codeine'].replace('.',',')}\n")
    for i in range(3):
        g=[[F(qc[b][i]['codeine']) for b in days[d]] for d in dd]
        allv=[x for r in g for x in r]; N=len(allv); k=len(g); m=sum(allv)/N
        means=[sum(r)/len(r) for r in g]
        ssb=sum(len(r)*(mm-m)**2 for r,mm in zip(g,means)); ssw=sum((x-mm)**2 for r,mm in zip(g,means) for x in r)
        n0=(F(N)-F(sum(len(r)**2 for r in g),N))/(k-1)
        msb=ssb/(k-1); msw=ssw/(N-k)
        run=max(F(0),(msb-msw)/n0)
        e={'n':N,'runs':k,'sizes':[len(r) for r in g],'mean':float(m),'ss_between':float(ssb),'ss_within':float(ssw),'n0':float(n0),'s_r':sqrt(msw),'s_run':sqrt(run),'s_I':sqrt(msw+run),'f':float(msb/msw)}
        if run>0:
            x,y=msb/n0,(1-1/n0)*msw
            e['nu_I']=float((x+y)**2/(x*x/(k-1)+y*y/(N-k)))
        else: e['nu_I']=N-k
        e['relative_bias']=float(m/nominal[i]-1)
        exp['precision'][f'qc{i+1}']=e
json.dump(exp,open('lcms_expected.json','w'),indent=1)
