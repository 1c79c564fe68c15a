# Robust standard errors of NIST Longley in exact rational arithmetic (only the last square root is rounded). Rebuild: python3 make-exact-sandwich.py
from pathlib import Path
here=Path(__file__).parent
import json
from fractions import Fraction as F
d=json.load(open(here/'../nist/nist_strd.json'))['Longley']['data']
n=16;k=7
X=[[F(1)]+[F(str(d['x%d'%j][i])) for j in range(1,7)] for i in range(n)];y=[F(d['y'][i]) for i in range(n)]
A=[[sum(X[i][a]*X[i][b] for i in range(n)) for b in range(k)] for a in range(k)]
def inv(A):
    n=len(A);M=[r[:]+[F(int(i==j)) for j in range(n)] for i,r in enumerate(A)]
    for c in range(n):
        p=next(r for r in range(c,n) if M[r][c]!=0);M[c],M[p]=M[p],M[c]
        v=M[c][c];M[c]=[x/v for x in M[c]]
        for r in range(n):
            if r!=c: f=M[r][c];M[r]=[x-f*z for x,z in zip(M[r],M[c])]
    return [r[n:] for r in M]
I=inv(A);b=[sum(I[a][c]*sum(X[i][c]*y[i] for i in range(n)) for c in range(k)) for a in range(k)]
e=[y[i]-sum(X[i][j]*b[j] for j in range(k)) for i in range(n)]
h=[sum(X[i][a]*I[a][c]*X[i][c] for a in range(k) for c in range(k)) for i in range(n)]
from decimal import Decimal,getcontext
getcontext().prec=40
def sq(f): return str((Decimal(f.numerator)/Decimal(f.denominator)).sqrt())[:20]
def sand(om):
    P=[[sum(I[a][c]*X[i][c] for c in range(k)) for i in range(n)] for a in range(k)]
    return [sq(sum(P[a][i]*om(i,j)*P[a][j] for i in range(n) for j in range(n))) for a in range(k)]
out={'HC0':sand(lambda i,j:e[i]**2 if i==j else F(0)),'HC1':sand(lambda i,j:e[i]**2*F(16,9) if i==j else F(0)),'HC2':sand(lambda i,j:e[i]**2/(1-h[i]) if i==j else F(0)),'HC3':sand(lambda i,j:e[i]**2/(1-h[i])**2 if i==j else F(0)),
'NW2':sand(lambda i,j:e[i]*e[j]*(1-F(abs(i-j),3)) if abs(i-j)<=2 else F(0))}
json.dump(out,open(here/'longley_exact_sandwich.json','w'))
